import { Refusal } from '@shared/domain/errors';
import { isFirmStop } from '@shared/domain/route-rules';
import type { Job } from '../commands/run-command';
import { callOf, endStop, lockRoutes, routeOf, stepCall } from './lock-routes';
import { settleRoutes } from './settle-routes';

/**
 * Takes all stops off the route of somebody who stops working; the calls wait again.
 *
 * @throws Refusal `stop-is-firm` while a stop is accepted
 */
export async function clearRoute(
  job: Job,
  stormId: string,
  technicianId: string,
  why: string,
): Promise<void> {
  const routes = await lockRoutes(job, stormId, [technicianId]);
  const stops = [...routeOf(routes, technicianId)];
  const firm = stops.find((stop) => isFirmStop(stop.state));
  if (firm)
    throw new Refusal(
      'stop-is-firm',
      `Call ${String(callOf(routes, firm).number)} is accepted: have it finished or pull it first.`,
    );
  for (const stop of stops) {
    endStop(job, routes, stop, 'pulled', why);
    await stepCall(job, routes, callOf(routes, stop), 'waiting', why);
  }
  await settleRoutes(job, routes);
}

/** Times a route anew after its shifts or its start have changed. */
export async function settleRouteOf(
  job: Job,
  stormId: string,
  technicianId: string,
): Promise<void> {
  await settleRoutes(job, await lockRoutes(job, stormId, [technicianId]));
}
