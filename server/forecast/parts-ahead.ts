import { DateTime } from 'luxon';
import type { PartsAheadDto } from '@shared/contract/forecast';
import { isPlannable } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import {
  MOST_LACK_CHANCE,
  shelfAhead,
  vanPartsAhead,
  type VanAhead,
} from '@shared/domain/parts/parts-ahead';
import type { Context } from '../context';
import { asOfOneMoment } from '../db/transaction';
import { findStorm } from '../storms/storm-queries';
import { technicianDtos } from '../technicians/technician-rows';
import { chancesOf } from './forecast-facts';
import { callsAhead, stopsAhead } from './forecast-rows';
import { groupedBy } from './grouped-by';

/**
 * What the stops of each route need until the end of tomorrow, and what is on its van. A stop that is
 * being worked on has what it has.
 *
 * @throws Refusal `not-found`, `storm-closed`
 */
export function partsAhead(context: Context, stormId: string): Promise<PartsAheadDto> {
  const { sequelize, region } = context;
  return asOfOneMoment(sequelize, async (tx) => {
    const storm = await findStorm(stormId, tx);
    if (storm.state !== 'open')
      throw new Refusal('storm-closed', 'The storm is closed: no van has to be loaded for it.');
    const now = context.clock();
    const until = DateTime.fromMillis(now, { zone: region.dto.timeZone })
      .startOf('day')
      .plus({ days: 2 })
      .toMillis();
    const calls = new Map((await callsAhead(sequelize, stormId, tx)).map((one) => [one.id, one]));
    const stops = (await stopsAhead(sequelize, stormId, tx)).filter(
      ({ state, arriveAt }) => state !== 'done' && state !== 'on-site' && arriveAt < until,
    );
    const routes = groupedBy(stops, ({ technicianId }) => technicianId);
    const onRoute = new Set(stops.map(({ callId }) => callId));
    const technicians = await technicianDtos(sequelize, 'all', tx);
    const vans = technicians
      .filter(({ active, id }) => active || routes.has(id))
      .map((one) => ({
        name: one.name,
        ahead: {
          technicianId: one.id,
          stock: one.van,
          stops: (routes.get(one.id) ?? []).flatMap(({ callId }) => {
            const call = calls.get(callId);
            return call ? [chancesOf(call)] : [];
          }),
        } satisfies VanAhead,
      }));
    const waiting = [...calls.values()].filter(
      ({ id, state }) => isPlannable(state) && !onRoute.has(id),
    );
    return {
      at: now,
      until,
      mostLackChance: MOST_LACK_CHANCE,
      vans: vans.map(({ name, ahead }) => {
        const { parts, ...van } = vanPartsAhead(ahead);
        return { name, ...van, parts: [...parts] };
      }),
      shelf: [
        ...shelfAhead(
          vans.map(({ ahead }) => ahead),
          waiting.map(chancesOf),
        ),
      ],
      waitingCalls: waiting.length,
    };
  });
}
