import type { CallRecord } from '../calls/call-record';
import type { Job } from '../commands/run-command';
import { select } from '../db/sql';
import { endStop, lockRoutes, routeOf } from './lock-routes';
import { settleRoutes } from './settle-routes';

/**
 * Locks the route that a call stands on, if any, with all its calls: before the call alone, so that
 * all commands lock in one order.
 */
export async function lockRouteOf(job: Job, callId: string): Promise<void> {
  const seen = await activeStop(job, callId);
  if (seen) await lockRoutes(job, seen.storm_id, [seen.technician_id], [callId]);
}

/**
 * Takes a call that is settled otherwise off its route, whatever state its stop is in. The technician
 * is told why and gets the next offer. The call's own state is the caller's to set.
 */
export async function leaveRoute(job: Job, call: CallRecord, because: string): Promise<void> {
  const seen = await activeStop(job, call.id);
  if (!seen) return;
  const routes = await lockRoutes(job, seen.storm_id, [seen.technician_id], [call.id]);
  const stop = routeOf(routes, seen.technician_id).find(({ callId }) => callId === call.id);
  if (!stop) return;
  endStop(job, routes, stop, 'pulled', because);
  await settleRoutes(job, routes);
}

async function activeStop(
  job: Job,
  callId: string,
): Promise<{ technician_id: string; storm_id: string } | undefined> {
  const [stop] = await select<{ technician_id: string; storm_id: string }>(
    job.sequelize,
    'SELECT technician_id, storm_id FROM stops WHERE active_call = ?',
    [callId],
    job.tx,
  );
  return stop;
}
