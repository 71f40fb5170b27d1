import type { TechnicianDay } from '@shared/contract/routes';
import { Refusal } from '@shared/domain/errors';
import { dayStream } from '../commands/feed';
import type { Context } from '../context';
import { select } from '../db/sql';
import { asOfOneMoment } from '../db/transaction';
import { stopCards } from '../routes/stop-cards';
import { openStorm } from '../storms/storm-queries';
import { technicianDtos } from './technician-rows';

/**
 * A technician's stops in the order of the route as of one moment, with the number of the last
 * change that they hold. Only the open storm's: nobody drives for one that is closed.
 */
export function technicianDay(
  { sequelize }: Context,
  technicianId: string | null,
): Promise<TechnicianDay> {
  return asOfOneMoment(sequelize, async (tx) => {
    const [technician] =
      technicianId === null ? [] : await technicianDtos(sequelize, { ids: [technicianId] }, tx);
    if (!technician) throw new Refusal('not-found', 'This account belongs to no technician.');
    const storm = await openStorm(tx);
    const [feed] = storm
      ? await select<{ n: number }>(
          sequelize,
          'SELECT n FROM feeds WHERE storm_id = ? AND stream = ?',
          [storm.id, dayStream(technician.id)],
          tx,
        )
      : [];
    const { cards } = await stopCards(sequelize, { technicianId: technician.id }, tx);
    return {
      stormId: storm?.id ?? null,
      n: Number(feed?.n ?? 0),
      technician,
      stops: cards
        .filter(({ stop }) => stop.stormId === storm?.id)
        .sort((a, b) => a.stop.position - b.stop.position),
    };
  });
}
