import type { Sequelize } from 'sequelize';
import type { AreaShape } from '@shared/contract/areas';
import { json, select } from '../db/sql';
import { nearAreas, type Nearness } from '../region/nearness';

const OF_OPEN_STORM = `FROM areas JOIN storms ON storms.id = areas.storm_id AND storms.state = 'open'`;

/** How near a place is to the open storm's outage areas, for what is asked at every key that is typed. */
export class OpenAreas {
  private stamp = '';
  private near: Nearness | null = null;

  constructor(private readonly sequelize: Sequelize) {}

  /**
   * Their ground is read again only when an area was drawn, changed or removed, by whichever server.
   *
   * @returns null while there are none
   */
  async nearness(): Promise<Nearness | null> {
    const [now] = await select<{ stamp: string }>(
      this.sequelize,
      `SELECT CONCAT(COUNT(*), ' ', BIT_XOR(CRC32(CONCAT(areas.id, areas.version)))) AS stamp ${OF_OPEN_STORM}`,
    );
    const stamp = now?.stamp ?? '';
    if (stamp !== this.stamp) {
      const rows = await select<{ shape: unknown }>(
        this.sequelize,
        `SELECT areas.shape ${OF_OPEN_STORM}`,
      );
      this.near = nearAreas(rows.map(({ shape }) => json<AreaShape>(shape)));
      this.stamp = stamp;
    }
    return this.near;
  }
}
