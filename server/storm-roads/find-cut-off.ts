import { randomUUID } from 'node:crypto';
import type { RoadConditions } from '@shared/domain/roads/conditions';
import { blocksRoad } from '@shared/domain/storm-roads';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { machine } from '../commands/actor';
import { runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { change, select } from '../db/sql';
import type { RoadsPort } from '../workers/ports';

interface Place {
  id: string;
  lon: number;
  lat: number;
  cut_off: number;
}

/** In MariaDB's own words: under which conditions and for which place a call was looked at. */
const REACH_KEY = "CONVERT(SHA2(CONCAT(?, ' ', lon, ' ', lat), 256) USING ascii)";

/**
 * Marks the open calls that no technician can drive to, and unmarks those that somebody can again. A call is
 * looked at once under each set of conditions and for each place that it is given; one that is cut off is
 * looked at again when asked to, for technicians move.
 */
export async function findCutOff(
  context: Context,
  stormId: string,
  {
    conditions,
    key,
    looksAgain,
  }: {
    readonly conditions: RoadConditions;
    /** Names the conditions. */
    readonly key: string;
    readonly looksAgain: boolean;
  },
): Promise<void> {
  const { sequelize, roads } = context;
  if (!roads) return;
  const calls = await select<Place>(
    sequelize,
    `SELECT id, lon, lat, cut_off FROM calls
      WHERE storm_id = ? AND settled_at IS NULL AND lon IS NOT NULL
        AND (reach_key IS NULL OR reach_key <> ${REACH_KEY} OR (cut_off AND ?))
      ORDER BY id`,
    [stormId, key, looksAgain],
  );
  if (calls.length === 0) return;
  const cutOff = await beyondReach(context, roads, calls, conditions);
  const changed = calls.filter((call) => Boolean(call.cut_off) !== cutOff.has(call.id));
  if (changed.length > 0) await mark(context, stormId, changed, cutOff);
  await change(sequelize, `UPDATE calls SET reach_key = ${REACH_KEY} WHERE id IN (?)`, [
    key,
    calls.map(({ id }) => id),
  ]);
}

/** The calls that no van can reach, from where it is or from where its shifts start. */
async function beyondReach(
  { sequelize }: Context,
  roads: RoadsPort,
  calls: readonly Place[],
  conditions: RoadConditions,
): Promise<ReadonlySet<string>> {
  // Every road is open, or nobody is there to drive: nothing is cut off from anybody.
  if (!conditions.roads.some(({ kind }) => blocksRoad(kind))) return new Set();
  const vans = await vanPlaces(sequelize);
  if (vans.length === 0) return new Set();
  let left = [...calls];
  for (const van of vans) {
    if (left.length === 0) break;
    const { there } = await roads.oneToMany(
      van,
      left.map(({ lon, lat }): LonLat => [lon, lat]),
      conditions,
    );
    left = left.filter((_, i) => !Number.isFinite(there.seconds[i]));
  }
  return new Set(left.map(({ id }) => id));
}

async function vanPlaces(sequelize: Context['sequelize']): Promise<LonLat[]> {
  const rows = await select<{ lon: number; lat: number }>(
    sequelize,
    `SELECT position_lon AS lon, position_lat AS lat FROM technicians
      WHERE active AND position_lon IS NOT NULL
      UNION SELECT start_lon, start_lat FROM technicians WHERE active`,
  );
  return rows.map(({ lon, lat }) => [lon, lat]);
}

async function mark(
  context: Context,
  stormId: string,
  calls: readonly Place[],
  cutOff: ReadonlySet<string>,
): Promise<void> {
  const order = {
    actor: machine('road conditions'),
    type: 'findCutOff',
    commandId: randomUUID(),
    asked: calls.map(({ id }) => id),
  };
  await runCommand(context, order, async (job) => {
    job.inStorm(stormId);
    for (const isCutOff of [true, false]) {
      const ids = calls.filter(({ id }) => cutOff.has(id) === isCutOff).map(({ id }) => id);
      if (ids.length === 0) continue;
      // No new version: what a dispatcher has typed into the call meanwhile must not be refused for it.
      await change(
        context.sequelize,
        'UPDATE calls SET cut_off = ? WHERE id IN (?)',
        [isCutOff, ids.sort()],
        job.tx,
      );
      for (const id of ids) {
        job.touched.call(id);
        job.note(
          'call',
          id,
          isCutOff ? 'cut off: no open road leads there' : 'can be reached again',
        );
      }
    }
    return null;
  });
}
