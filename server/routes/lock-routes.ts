import { Op } from 'sequelize';
import type { Settings } from '@shared/contract/office';
import type { CallState } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import type { RouteStopState, Sighting, WorkShift } from '@shared/domain/route-rules';
import type { LearnedService } from '@shared/domain/service-times';
import { CallRecord } from '../calls/call-record';
import { moveCall } from '../calls/change-call';
import type { Job } from '../commands/run-command';
import { readSettings } from '../office/settings';
import { lockTechnicians, shiftsAhead } from '../technicians/lock-technicians';
import type { TechnicianRecord } from '../technicians/technician-record';
import { withBreaksDue } from './breaks-due';
import { learnedVisits } from './measured-visits';
import { StopRecord } from './stop-record';
import { ACTIVE_STOPS } from './stop-rows';
import { visitFacts, type VisitFacts } from './visit-facts';
import { lastDoors } from './where-technicians-are';

/** A stop that is still to be done. */
export type ActiveStop = StopRecord & { state: RouteStopState };

/** Routes under change: whatever a command needs of them, locked, and what it has changed so far. */
export interface Routes {
  readonly stormId: string;
  readonly settings: Settings;
  readonly technicians: ReadonlyMap<string, TechnicianRecord>;
  readonly shifts: ReadonlyMap<string, readonly WorkShift[]>;
  readonly lastDoors: ReadonlyMap<string, Sighting>;
  readonly calls: ReadonlyMap<string, CallRecord>;
  readonly visits: ReadonlyMap<string, VisitFacts>;
  /** What finished visits say of the time at a stop; `null` while it does not count. */
  readonly learned: LearnedService | null;
  /** By technician, in the order of the route. Commands change these lists in place. */
  readonly stops: Map<string, StopRecord[]>;
  /** Stops that came off a route and have to be saved. */
  readonly ended: StopRecord[];
  readonly changedCalls: Set<CallRecord>;
}

/**
 * Locks routes with their technicians, calls and stops, always in this order. Lock the storm
 * before, when the command needs it too.
 *
 * @param alsoCalls calls that are on no route yet
 */
export async function lockRoutes(
  job: Job,
  stormId: string,
  whose: readonly string[] | 'all',
  alsoCalls: readonly string[] = [],
): Promise<Routes> {
  job.inStorm(stormId);
  const technicians = await lockTechnicians(job, whose);
  const ids = technicians.map(({ id }) => id);
  const onRoutes = {
    where: {
      stormId,
      technicianId: { [Op.in]: ids },
      state: { [Op.in]: [...ACTIVE_STOPS] },
    },
    transaction: job.tx,
  };
  // With the technicians locked their routes stand still; which calls to lock can be read in peace.
  const seen = await StopRecord.findAll({ attributes: ['callId'], ...onRoutes });
  const calls = await lockCalls(job, [...alsoCalls, ...seen.map(({ callId }) => callId)]);
  const stops = await StopRecord.findAll({
    ...onRoutes,
    order: [
      ['position', 'ASC'],
      ['id', 'ASC'],
    ],
    lock: job.tx.LOCK.UPDATE,
  });
  const settings = await readSettings(job.sequelize, job.tx);
  const shifts = await shiftsAhead(job.sequelize, job.now, job.tx);
  return {
    stormId,
    settings,
    technicians: new Map(technicians.map((one) => [one.id, one])),
    shifts: await withBreaksDue(job.sequelize, shifts, job.now, job.tx),
    lastDoors: await lastDoors(job.sequelize, ids, job.tx),
    calls: new Map(calls.map((call) => [call.id, call])),
    visits: await visitFacts(
      job.sequelize,
      calls.map(({ id }) => id),
      job.now,
      job.tx,
    ),
    learned: await learnedVisits(job.sequelize, settings, job.tx),
    stops: new Map(ids.map((id) => [id, stops.filter((stop) => stop.technicianId === id)])),
    ended: [],
    changedCalls: new Set(),
  };
}

async function lockCalls(job: Job, ids: readonly string[]): Promise<CallRecord[]> {
  const wanted = new Set(ids);
  const calls = await CallRecord.findAll({
    where: { id: { [Op.in]: [...wanted] } },
    order: [['id', 'ASC']],
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  if (calls.length !== wanted.size) throw new Refusal('not-found', 'There is no such call.');
  return calls;
}

/** The call of a locked stop. */
export function callOf(routes: Routes, stop: Pick<StopRecord, 'callId'>): CallRecord {
  const call = routes.calls.get(stop.callId);
  if (!call) throw new Error(`call ${stop.callId} was not locked with its route`);
  return call;
}

export function technicianOf(routes: Routes, id: string): TechnicianRecord {
  const technician = routes.technicians.get(id);
  if (!technician) throw new Error(`technician ${id} was not locked`);
  return technician;
}

export function routeOf(routes: Routes, technicianId: string): ActiveStop[] {
  const stops = routes.stops.get(technicianId);
  if (!stops) throw new Error(`the route of ${technicianId} was not locked`);
  return stops as ActiveStop[];
}

/** Moves a call one step; it is saved once, when the routes are settled. */
export async function stepCall(
  job: Job,
  routes: Routes,
  call: CallRecord,
  to: CallState,
  reason: string,
): Promise<void> {
  await moveCall(job, call, to, reason);
  routes.changedCalls.add(call);
}

/** Takes a stop off its route; its call's state is the caller's to set. */
export function endStop(
  job: Job,
  routes: Routes,
  stop: StopRecord,
  state: 'done' | 'declined' | 'pulled',
  because: string,
): void {
  const route = routeOf(routes, stop.technicianId);
  const index = route.findIndex(({ id }) => id === stop.id);
  if (index >= 0) route.splice(index, 1);
  stop.set({ state, endedAt: job.at, endedBecause: because.slice(0, 300) });
  routes.ended.push(stop);
}
