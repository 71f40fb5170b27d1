import { Refusal } from '@shared/domain/errors';
import { MINUTE_MS } from '@shared/domain/instant';
import { fetchesOn } from '@shared/domain/fetch-parts';
import { routeTimes, type RouteStart, type StopTimes } from '@shared/domain/route-times';
import type { Settings } from '@shared/contract/office';
import { saveCall } from '../calls/change-call';
import type { Job } from '../commands/run-command';
import { isDuplicateOf } from '../db/sql';
import { callOf, routeOf, technicianOf, type Routes } from './lock-routes';
import { offerNext } from './offer-next';
import type { StopRecord } from './stop-record';
import { travelNow } from './travel-by-settings';
import { minutesAtDoor } from './visit-facts';
import { whereIs } from './where-technicians-are';

/** A time that moves by less is no news, and every board would have to hear of it. */
const SAME_TIME_MS = MINUTE_MS;

/**
 * Brings routes in order after a change and saves them: places from 0 without gaps, times from where
 * the technician is now, the first stop on offer. Every command that changes a route ends with it.
 */
export async function settleRoutes(job: Job, routes: Routes): Promise<void> {
  // What left comes first: two rows may not hold one call, nor one technician two places.
  for (const stop of routes.ended) await saveStop(job, stop);
  for (const technicianId of routes.stops.keys()) {
    const route = routeOf(routes, technicianId);
    setFetches(routes, technicianId);
    const times = timesOf(job, routes, technicianId);
    route.forEach((stop, index) => {
      stop.position = index;
      setTimes(stop, times[index]);
    });
    await offerNext(job, routes, technicianId);
    for (const stop of route) await saveStop(job, stop);
  }
  for (const call of routes.changedCalls) await saveCall(job, call);
}

function timesOf(job: Job, routes: Routes, technicianId: string): StopTimes[] {
  const technician = technicianOf(routes, technicianId);
  const shifts = routes.shifts.get(technicianId) ?? [];
  return routeTimes(
    {
      now: job.now,
      at: whereIs(technician, routes.lastDoors.get(technicianId), shifts, job.now),
      home: [technician.startLon, technician.startLat],
      shifts,
      shop: shopOf(routes.settings),
      mostOvertimeMinutes: routes.settings.mostOvertimeMinutes,
    },
    routeOf(routes, technicianId).map((stop) => {
      const { lon, lat } = callOf(routes, stop);
      const visit = routes.visits.get(stop.callId);
      return {
        state: stop.state,
        locked: stop.locked ?? false,
        lonLat: lon == null || lat == null ? null : [lon, lat],
        arriveAt: stop.arriveAt.getTime(),
        driveMinutes: stop.driveMinutes,
        isUnreachable: stop.unreachable ?? false,
        serviceMinutes: visit
          ? minutesAtDoor(visit, routes.settings, routes.learned, technicianId)
          : routes.settings.serviceMinutes,
        window: visit?.window ?? null,
        fetches: Boolean(stop.fetches),
      };
    }),
    travelNow(job.roads, routes.settings),
  );
}

/** Which stop the van drives to by the store, and what it fetches there, after any change of its route. */
function setFetches(routes: Routes, technicianId: string): void {
  const route = routeOf(routes, technicianId);
  const fetches = routes.settings.shopPlace
    ? fetchesOn(
        route.map((stop) => ({
          state: stop.state,
          locked: stop.locked ?? false,
          needs: routes.visits.get(stop.callId)?.needs ?? [],
          fetches: stop.fetches ?? null,
        })),
        technicianOf(routes, technicianId).van,
      )
    : [];
  route.forEach((stop, index) => {
    const next = fetches[index] ?? null;
    if (JSON.stringify(stop.fetches ?? null) !== JSON.stringify(next)) stop.fetches = next;
  });
}

/** The company's store, as times are counted with it. */
export const shopOf = ({
  shopPlace,
  shopMinutes,
}: Pick<Settings, 'shopPlace' | 'shopMinutes'>): RouteStart['shop'] =>
  shopPlace && { at: shopPlace, minutes: shopMinutes };

function setTimes(stop: StopRecord, times: StopTimes | undefined): void {
  if (!times) return;
  // Assigned only when it differs: an equal value would still count as a change of the row.
  if ((stop.unreachable ?? false) === times.isReachable) stop.unreachable = !times.isReachable;
  const isNews =
    Math.abs(times.arriveAt - stop.arriveAt.getTime()) >= SAME_TIME_MS ||
    Math.abs(times.finishAt - stop.finishAt.getTime()) >= SAME_TIME_MS ||
    times.arriveAt > stop.finishAt.getTime();
  if (!isNews && !stop.isNewRecord) return;
  stop.set({
    arriveAt: new Date(times.arriveAt),
    finishAt: new Date(times.finishAt),
    driveMinutes: Math.round(times.driveMinutes * 10) / 10,
  });
}

async function saveStop(job: Job, stop: StopRecord): Promise<void> {
  if (!stop.isNewRecord) {
    if (stop.changed() === false) return;
    stop.version = (stop.version ?? 0) + 1;
  }
  try {
    await stop.save({ transaction: job.tx });
  } catch (error) {
    throw asRefusal(error) ?? error;
  }
  job.touched.stop(stop.id);
}

/** The database holds these two rules; whoever runs into one is told what it means. */
function asRefusal(error: unknown): Refusal | null {
  if (isDuplicateOf(error, 'one_technician_per_call'))
    return new Refusal('already-on-a-route', 'This call is on a route already.');
  if (isDuplicateOf(error, 'one_place_at_a_time'))
    return new Refusal('technician-busy', 'The technician is on the way or at another stop.');
  if (isDuplicateOf(error, 'PRIMARY'))
    return new Refusal('already-used', 'A stop with this id exists already. Make a new id.');
  return null;
}
