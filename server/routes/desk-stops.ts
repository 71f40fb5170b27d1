import type { AddStop, LockStop, MoveStop, PullStop } from '@shared/contract/routes';
import type { z } from 'zod';
import { isSettled } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import { isFirmStop, isUnderWay, missingSkills, placeOnRoute } from '@shared/domain/route-rules';
import type { CallRecord } from '../calls/call-record';
import { lockCall, refuseIfClaimedByAnother } from '../calls/change-call';
import type { Job } from '../commands/run-command';
import { select } from '../db/sql';
import { lockOpenStorm } from '../storms/storm-queries';
import type { TechnicianRecord } from '../technicians/technician-record';
import {
  callOf,
  endStop,
  lockRoutes,
  routeOf,
  stepCall,
  technicianOf,
  type ActiveStop,
} from './lock-routes';
import { withdrawOffer } from './offer-next';
import { openStop } from './open-stop';
import { overtakePlans } from './overtake-plans';
import { settleRoutes } from './settle-routes';
import { StopRecord } from './stop-record';

type With<Ids extends string, Body extends z.ZodType> = z.output<Body> &
  Readonly<Record<Ids, string>>;

/**
 * Puts a waiting call on a route by hand.
 *
 * @throws Refusal when the call is not waiting, is held by another, or asks for a missing skill
 */
export async function addStop(job: Job, told: With<'callId', typeof AddStop>): Promise<StopRecord> {
  const storm = await lockOpenStorm(await stormOfCall(job, told.callId), job.tx);
  const routes = await lockRoutes(job, storm.id, [told.technicianId], [told.callId]);
  await lockCall(job, told.callId, told.version);
  const call = callOf(routes, told);
  refuseIfClaimedByAnother(job, call);
  refuseUnlessWaiting(call);
  const technician = technicianOf(routes, told.technicianId);
  refuseUnfit(technician, call);

  const route = routeOf(routes, technician.id);
  const place = placeOnRoute(route, told.position);
  const promised = route[place - 1]?.finishAt ?? job.at;
  const stop = StopRecord.build({
    id: told.stopId,
    stormId: storm.id,
    technicianId: technician.id,
    callId: call.id,
    position: place,
    state: 'planned',
    arriveAt: promised,
    finishAt: promised,
    driveMinutes: 0,
    because: `Put here by ${job.actor.name}.`,
  }) as ActiveStop;
  route.splice(place, 0, stop);
  await stepCall(job, routes, call, 'planned', `put on the route of ${technician.name}`);
  await settleRoutes(job, routes);
  await overtakePlans(job, storm);
  job.note('stop', stop.id, `put call ${String(call.number)} on a route by hand`);
  return stop;
}

/** Locks a stop against the planner, or frees it. A firm stop needs no lock. */
export async function lockStop(
  job: Job,
  told: With<'stopId', typeof LockStop>,
): Promise<StopRecord> {
  const { routes, stop, call } = await openStop(job, told);
  refuseIfFirm(stop, call);
  stop.locked = told.locked;
  await settleRoutes(job, routes);
  job.note(
    'stop',
    stop.id,
    `${told.locked ? 'locked' : 'freed'} the stop of call ${String(call.number)}`,
  );
  return stop;
}

/** Moves a stop that is not yet accepted, on its route or to another technician's. */
export async function moveStop(
  job: Job,
  told: With<'stopId', typeof MoveStop>,
): Promise<StopRecord> {
  const { storm, routes, stop, call } = await openStop(job, told, told.technicianId);
  refuseIfFirm(stop, call);
  const from = technicianOf(routes, stop.technicianId);
  const to = technicianOf(routes, told.technicianId);
  if (to.id !== from.id) refuseUnfit(to, call);

  const left = routeOf(routes, from.id);
  left.splice(left.indexOf(stop), 1);
  const route = routeOf(routes, to.id);
  const place = placeOnRoute(route, told.position);
  if (to.id !== from.id) {
    if (stop.state === 'offered') await withdrawOffer(job, routes, stop, `given to ${to.name}`);
    stop.technicianId = to.id;
    job.touched.left.push({
      technicianId: from.id,
      stopId: stop.id,
      reason: `Call ${String(call.number)} was given to another technician.`,
    });
  }
  stop.arriveAt = route[place - 1]?.finishAt ?? job.at;
  stop.finishAt = stop.arriveAt;
  stop.because = `Put here by ${job.actor.name}.`;
  route.splice(place, 0, stop);
  await settleRoutes(job, routes);
  await overtakePlans(job, storm);
  job.note('stop', stop.id, `moved the stop of call ${String(call.number)}`);
  return stop;
}

/**
 * Takes a stop off its route; the call waits again. An accepted one too, since a person with a name
 * and a reason asks for it, but none that the technician is driving to or at.
 */
export async function pullStop(
  job: Job,
  told: With<'stopId', typeof PullStop>,
): Promise<StopRecord> {
  const { storm, routes, stop, call } = await openStop(job, told);
  refuseIfClaimedByAnother(job, call);
  if (isUnderWay(stop.state))
    throw new Refusal(
      'stop-is-firm',
      `The technician is already on the way to call ${String(call.number)}, or there. Ring them.`,
    );
  const wasAccepted = stop.state === 'accepted';
  endStop(job, routes, stop, 'pulled', `Pulled by ${job.actor.name}: ${told.reason}`);
  await stepCall(job, routes, call, 'waiting', `pulled: ${told.reason}`);
  await settleRoutes(job, routes);
  await overtakePlans(job, storm);
  job.note(
    'stop',
    stop.id,
    `pulled the ${wasAccepted ? 'accepted ' : ''}stop of call ${String(call.number)}`,
  );
  return stop;
}

async function stormOfCall(job: Job, callId: string): Promise<string> {
  const [call] = await select<{ storm_id: string }>(
    job.sequelize,
    'SELECT storm_id FROM calls WHERE id = ?',
    [callId],
    job.tx,
  );
  if (!call) throw new Refusal('not-found', 'There is no such call.');
  return call.storm_id;
}

function refuseIfFirm(stop: ActiveStop, call: CallRecord): void {
  if (isFirmStop(stop.state))
    throw new Refusal(
      'stop-is-firm',
      `The technician has accepted call ${String(call.number)}; it stays where it is.`,
    );
}

function refuseUnlessWaiting(call: CallRecord): void {
  const number = String(call.number);
  if (isSettled(call.state)) throw new Refusal('call-not-open', `Call ${number} is settled.`);
  if (['planned', 'offered', 'accepted', 'travelling', 'on-site'].includes(call.state))
    throw new Refusal('already-on-a-route', `Call ${number} is on a route already.`);
  if (call.state !== 'waiting')
    throw new Refusal('illegal-transition', `Call ${number} is not waiting for a visit yet.`);
}

function refuseUnfit(technician: TechnicianRecord, call: CallRecord): void {
  if (!technician.active)
    throw new Refusal('illegal-transition', `${technician.name} is not at work.`);
  const missing = missingSkills(call.skills, technician.skills);
  if (missing.length > 0)
    throw new Refusal(
      'skill-missing',
      `Call ${String(call.number)} needs ${missing.join(', ')}, which ${technician.name} does not have.`,
    );
}
