import type { StormDto } from '@shared/contract/office';
import { Refusal } from '@shared/domain/errors';
import { isUnderWay } from '@shared/domain/route-rules';
import type { Job } from '../commands/run-command';
import {
  callOf,
  endStop,
  lockRoutes,
  stepCall,
  technicianOf,
  type ActiveStop,
  type Routes,
} from '../routes/lock-routes';
import { setAside } from '../routes/overtake-plans';
import { settleRoutes } from '../routes/settle-routes';
import { lockStorm, toStormDto } from './storm-queries';

/**
 * Closes a storm. Nobody drives for one that is closed: what is still on a route comes off it, its
 * technician is told why, and its call waits. Proposed routes are set aside.
 *
 * @throws Refusal `not-found`, `stale-version` with the storm as it is now, `storm-closed`, or
 * `technician-busy` while somebody is on the way to a customer or there
 */
export async function closeStorm(
  job: Job,
  told: { readonly stormId: string; readonly version: number },
): Promise<StormDto> {
  const storm = await lockStorm(told.stormId, job.tx);
  if (storm.version !== told.version)
    throw new Refusal('stale-version', 'The storm has changed.', toStormDto(storm));
  if (storm.state === 'closed') throw new Refusal('storm-closed', 'The storm is closed already.');

  const routes = await lockRoutes(job, storm.id, 'all');
  const stops = [...routes.stops.values()].flat() as ActiveStop[];
  refuseWhileUnderWay(routes, stops);
  const why = `The storm "${storm.name}" was closed.`;
  for (const stop of stops) {
    endStop(job, routes, stop, 'pulled', why);
    await stepCall(job, routes, callOf(routes, stop), 'waiting', 'the storm was closed');
  }
  await settleRoutes(job, routes);
  await setAside(job, storm.id);

  storm.set({ state: 'closed', closedAt: job.at, version: (storm.version ?? 0) + 1 });
  await storm.save({ transaction: job.tx });
  job.touched.storm = true;
  job.note('storm', storm.id, `closed the storm; ${String(stops.length)} stops were pulled`);
  return toStormDto(storm);
}

function refuseWhileUnderWay(routes: Routes, stops: readonly ActiveStop[]): void {
  const underWay = stops.filter((stop) => isUnderWay(stop.state));
  if (underWay.length === 0) return;
  const names = underWay.map((stop) => technicianOf(routes, stop.technicianId).name).join(', ');
  throw new Refusal(
    'technician-busy',
    underWay.length === 1
      ? `1 technician is still on the way to a customer or there: ${names}. Close the storm afterwards.`
      : `${String(underWay.length)} technicians are still on the way to customers or there: ${names}. Close the storm afterwards.`,
  );
}
