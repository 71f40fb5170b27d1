import type { z } from 'zod';
import type { DeclineStop, FinishStop, StartTravel, TellEta } from '@shared/contract/routes';
import { STATE_WORDS, type VisitOutcome } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import { addMinutes, HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { loaded } from '@shared/domain/fetch-parts';
import { isUnderWay, type RouteStopState } from '@shared/domain/route-rules';
import { drive } from '@shared/domain/route-times';
import type { Part } from '@shared/domain/skills';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { CallRecord } from '../calls/call-record';
import { writeRemark } from '../calls/change-call';
import { windClocks } from '../calls/store-units';
import type { Job } from '../commands/run-command';
import type { TechnicianRecord } from '../technicians/technician-record';
import { tellEtaIfMoved, tellOnTheWay } from '../texts/tell-customer';
import {
  endStop,
  routeOf,
  stepCall,
  technicianOf,
  type ActiveStop,
  type Routes,
} from './lock-routes';
import { openOwnStop } from './open-stop';
import { settleRoutes, shopOf } from './settle-routes';
import { travelNow } from './travel-by-settings';
import { newestSighting, whereIs } from './where-technicians-are';

interface OwnStop {
  readonly stopId: string;
  readonly version: number;
}
type Own<Body extends z.ZodType> = z.output<Body> & OwnStop;

/** A corrected arrival may lie a little in the past, for clocks differ, and not beyond a day. */
const ETA_SLACK_MS = 5 * MINUTE_MS;
const FARTHEST_ETA_MS = 24 * HOUR_MS;

/** The offered stop is the technician's from here; only a person with a name moves it now. */
export async function acceptStop(job: Job, told: OwnStop): Promise<void> {
  const { routes, stop, call } = await openOwnStop(job, told);
  refuseUnless(stop, ['offered'], 'accepted');
  stop.set({ state: 'accepted', acceptedAt: job.at });
  await stepCall(job, routes, call, 'accepted', 'accepted');
  await settleRoutes(job, routes);
  job.note('stop', stop.id, `accepted the stop of call ${String(call.number)}`);
}

/**
 * The technician gives a stop back, with a reason; the call waits again and the next stop is offered.
 * An accepted one too, and one that cannot be reached: only they can know.
 */
export async function declineStop(job: Job, told: Own<typeof DeclineStop>): Promise<void> {
  const { routes, stop, call } = await openOwnStop(job, told);
  refuseUnless(stop, ['offered', 'accepted', 'travelling'], 'declined');
  const before = stop.state;
  const reason = told.note === '' ? told.reason : `${told.reason}: ${told.note}`;
  endStop(job, routes, stop, 'declined', `Declined: ${reason}`);
  await stepCall(job, routes, call, 'waiting', `declined: ${reason}`);
  if (before === 'travelling')
    await writeRemark(
      job,
      call.id,
      `Given back on the way (${reason}). The customer expects somebody: ring them.`,
    );
  await settleRoutes(job, routes);
  job.note('stop', stop.id, `declined the ${before} stop of call ${String(call.number)}`);
}

/** The technician drives off; the customer is texted when to expect them. */
export async function startTravel(job: Job, told: Own<typeof StartTravel>): Promise<void> {
  const { routes, stop, call } = await openOwnStop(job, told);
  refuseUnless(stop, ['accepted'], 'driven to');
  if (routeOf(routes, stop.technicianId).some((other) => isUnderWay(other.state)))
    throw new Refusal('technician-busy', 'Finish the stop that you are at before you drive on.');
  const from = told.from ?? placeOf(job, routes, stop.technicianId);
  const arrival = arrivalFrom(job, routes, from, call, Boolean(stop.fetches));
  // A drive that is measured needs to have begun where somebody saw it begin.
  const start = told.from ?? seenJustNow(job, routes, stop.technicianId);
  stop.set({
    state: 'travelling',
    travelAt: job.at,
    travelFromLon: start?.[0] ?? null,
    travelFromLat: start?.[1] ?? null,
  });
  const isUnreachable = arrival === null && call.lon != null;
  if ((stop.unreachable ?? false) !== isUnreachable) stop.unreachable = isUnreachable;
  await stepCall(job, routes, call, 'travelling', 'on the way');
  if (arrival === null) stop.arriveAt = latest(stop.arriveAt, job.at);
  else {
    setEta(stop, arrival.at);
    stop.driveMinutes = arrival.driveMinutes;
  }
  await tellOnTheWay(job, call, stop);
  await settleRoutes(job, routes);
  job.note('stop', stop.id, `started for call ${String(call.number)}`);
}

/** The technician corrects the arrival time while driving; a large change is texted. */
export async function tellEta(job: Job, told: Own<typeof TellEta>): Promise<void> {
  const { routes, stop, call } = await openOwnStop(job, told);
  refuseUnless(stop, ['travelling'], 'given an arrival time');
  if (told.etaAt < job.now - ETA_SLACK_MS || told.etaAt > job.now + FARTHEST_ETA_MS)
    throw new Refusal('times-disagree', 'Give an arrival time between now and tomorrow.');
  setEta(stop, told.etaAt);
  await tellEtaIfMoved(job, call, stop);
  await settleRoutes(job, routes);
  job.note('stop', stop.id, `corrected the arrival at call ${String(call.number)}`);
}

export async function arrive(job: Job, told: OwnStop): Promise<void> {
  const { routes, stop, call } = await openOwnStop(job, told);
  refuseUnless(stop, ['travelling'], 'arrived at');
  stop.set({ state: 'on-site', arrivedAt: job.at, arriveAt: job.at, etaAt: null });
  if (stop.fetches) await loadParts(job, technicianOf(routes, stop.technicianId), stop.fetches);
  await stepCall(job, routes, call, 'on-site', 'arrived');
  await settleRoutes(job, routes);
  job.note('stop', stop.id, `arrived at call ${String(call.number)}`);
}

/** Ends the visit with its outcome. Parts leave the van, and the next stop is offered. */
export async function finishStop(job: Job, told: Own<typeof FinishStop>): Promise<void> {
  const { routes, stop, call } = await openOwnStop(job, told);
  refuseUnless(stop, ['on-site'], 'finished');
  endStop(job, routes, stop, 'done', `Finished: ${STATE_WORDS[told.outcome].toLowerCase()}`);
  // The next drive begins at this door.
  const { lon, lat } = call;
  const lastDoors = new Map(routes.lastDoors);
  if (lon != null && lat != null)
    lastDoors.set(stop.technicianId, { at: [lon, lat], seenAt: job.now });
  await stepCall(job, routes, call, told.outcome, OUTCOME_REASONS[told.outcome]);
  // Cooling that runs again stops the clocks, and what was saved is settled with that.
  if (told.outcome === 'restored') await windClocks(job, call);
  if (told.note !== '') await writeRemark(job, call.id, told.note);
  await takeParts(job, technicianOf(routes, stop.technicianId), told.partsUsed);
  await settleRoutes(job, { ...routes, lastDoors });
  job.note('stop', stop.id, `finished call ${String(call.number)}: ${told.outcome}`);
}

const OUTCOME_REASONS: Readonly<Record<VisitOutcome, string>> = {
  restored: 'cooling restored by the visit',
  'parts-on-order': 'needs a part that is on order',
  'not-repairable': 'cannot be repaired',
  'no-access': 'nobody let the technician in',
  referred: 'referred to another trade',
};

/** The arrival as the technician or the drive says it; what follows on the route moves with it. */
export function setEta(stop: ActiveStop, etaAt: Instant): void {
  stop.etaAt = new Date(etaAt);
  const lasts = stop.finishAt.getTime() - stop.arriveAt.getTime();
  stop.set({ arriveAt: new Date(etaAt), finishAt: new Date(etaAt + lasts) });
}

function placeOf(job: Job, routes: Routes, technicianId: string): LonLat {
  return whereIs(
    technicianOf(routes, technicianId),
    routes.lastDoors.get(technicianId),
    routes.shifts.get(technicianId) ?? [],
    job.now,
  );
}

/** A van moves on within minutes: an older sighting does not say where a drive begins. Our estimate. */
const FRESH_MS = 5 * MINUTE_MS;

function seenJustNow({ now }: Job, routes: Routes, technicianId: string): LonLat | null {
  const seen = newestSighting(
    technicianOf(routes, technicianId),
    routes.lastDoors.get(technicianId),
  );
  return seen && now - seen.seenAt <= FRESH_MS ? seen.at : null;
}

/** Null where nobody knows the place or no open road leads there: an arrival would be made up. */
export function arrivalFrom(
  job: Pick<Job, 'now' | 'roads'>,
  { settings }: Pick<Routes, 'settings'>,
  from: LonLat,
  { lon, lat }: Pick<CallRecord, 'lon' | 'lat'>,
  isByShop = false,
): { readonly at: Instant; readonly driveMinutes: number } | null {
  if (lon == null || lat == null) return null;
  const travel = travelNow(job.roads, settings);
  const shop = isByShop ? shopOf(settings) : null;
  const driven = shop
    ? drive(travel, from, shop.at) + drive(travel, shop.at, [lon, lat])
    : drive(travel, from, [lon, lat]);
  const minutes = driven / MINUTE_MS;
  if (!Number.isFinite(minutes)) return null;
  return {
    at: addMinutes(job.now, minutes + (shop?.minutes ?? 0)),
    driveMinutes: Math.round(minutes * 10) / 10,
  };
}

/** Whoever arrives by the store has the parts on the van. */
async function loadParts(
  job: Job,
  technician: TechnicianRecord,
  fetched: Partial<Record<Part, number>>,
): Promise<void> {
  technician.set({
    van: loaded(technician.van, fetched),
    version: (technician.version ?? 0) + 1,
  });
  await technician.save({ transaction: job.tx });
  job.touched.technicians.add(technician.id);
}

async function takeParts(
  job: Job,
  technician: TechnicianRecord,
  parts: readonly Part[],
): Promise<void> {
  if (parts.length === 0) return;
  const van = { ...technician.van };
  // A part that the van was not known to carry was there all the same.
  for (const part of parts) van[part] = Math.max(0, (van[part] ?? 0) - 1);
  technician.set({ van, version: (technician.version ?? 0) + 1 });
  await technician.save({ transaction: job.tx });
  job.touched.technicians.add(technician.id);
}

function refuseUnless(stop: ActiveStop, states: readonly RouteStopState[], done: string): void {
  if (!states.includes(stop.state))
    throw new Refusal(
      'illegal-transition',
      `This stop is "${STATE_WORDS[stop.state].toLowerCase()}"; it cannot be ${done} now.`,
    );
}

const latest = (a: Date, b: Date): Date => (a > b ? a : b);
