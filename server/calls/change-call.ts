import { isSettled, mayFollow, STATE_WORDS, type CallState } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import { addMinutes } from '@shared/domain/instant';
import type { Job } from '../commands/run-command';
import { insert, select } from '../db/sql';
import { findOpenStorm } from '../storms/storm-queries';
import { callRows } from './call-rows';
import { CallRecord } from './call-record';

/**
 * The call, locked until the command ends. Lock the technician's route first and the storm before
 * that, when a command needs them too: one order of locking for all.
 *
 * @param version what the writer saw; leave it out where any version will do
 * @throws Refusal `not-found`, `storm-closed`, or `stale-version` with the row as it is now
 */
export async function lockCall(job: Job, callId: string, version?: number): Promise<CallRecord> {
  const call = await lockCallOfAnyStorm(job, callId);
  await findOpenStorm(call.stormId, job.tx);
  if (version !== undefined && call.version !== version) {
    const [current] = await callRows(job.sequelize, { ids: [call.id] }, job.now, job.tx);
    throw new Refusal(
      'stale-version',
      `Call ${String(call.number)} has changed since you opened it.`,
      current,
    );
  }
  return call;
}

/** As `lockCall`, for the little that is still done for a call whose storm is closed. */
export async function lockCallOfAnyStorm(job: Job, callId: string): Promise<CallRecord> {
  const call = await CallRecord.findByPk(callId, { transaction: job.tx, lock: job.tx.LOCK.UPDATE });
  if (!call) throw new Refusal('not-found', 'There is no such call.');
  job.inStorm(call.stormId);
  return call;
}

/** Refuses when another dispatcher holds the call. Technicians and the machine hold no claims. */
export function refuseIfClaimedByAnother(job: Job, call: CallRecord): void {
  if (job.actor.userId === null || job.actor.role === 'technician') return;
  const until = call.claimUntil?.getTime() ?? 0;
  if (call.claimUserId === null || call.claimUserId === job.actor.userId || until <= job.now)
    return;
  throw new Refusal(
    'claimed-by-another',
    `Somebody else is working on call ${String(call.number)}.`,
  );
}

/** Gives the claim to the one who acts, for so long. */
export function claim(job: Job, call: CallRecord, minutes: number): void {
  call.claimUserId = job.actor.userId;
  call.claimUntil = new Date(addMinutes(job.now, minutes));
}

export function releaseClaim(call: CallRecord): void {
  call.claimUserId = null;
  call.claimUntil = null;
}

/**
 * Moves the call to another state and writes the step into its history. Cooling that came back
 * stops the clocks at this moment.
 *
 * @throws Refusal `illegal-transition`, with the reason in words
 */
export async function moveCall(
  job: Job,
  call: CallRecord,
  to: CallState,
  reason: string,
): Promise<void> {
  const from = call.state;
  if (!mayFollow(from, to))
    throw new Refusal(
      'illegal-transition',
      `Call ${String(call.number)} is "${STATE_WORDS[from]}"; it cannot become "${STATE_WORDS[to]}".`,
    );
  call.state = to;
  if (isSettled(to)) {
    call.settledAt = job.at;
    releaseClaim(call);
  }
  if (to === 'restored' || to === 'running-again') call.restoredAt = job.at;
  await writeHistory(job, call, from, reason);
}

/** Saves the call under its next version and has it told. */
export async function saveCall(job: Job, call: CallRecord): Promise<void> {
  call.version += 1;
  await saveClaim(job, call);
}

/**
 * Saves a call of which nothing but the claim has changed, and has it told under the version that it
 * has: what whoever holds it has read is still so, and their next answer must not be refused as stale.
 */
export async function saveClaim(job: Job, call: CallRecord): Promise<void> {
  await call.save({ transaction: job.tx });
  job.touched.call(call.id);
}

/** One line of the call's history; a new call's first has no state before it. */
export async function writeHistory(
  job: Job,
  call: CallRecord,
  from: CallState | null,
  reason: string,
): Promise<void> {
  const [last] = await select<{ n: number; at: Date }>(
    job.sequelize,
    'SELECT n, at FROM call_changes WHERE call_id = ? ORDER BY n DESC LIMIT 1',
    [call.id],
    job.tx,
  );
  await insert(
    job.sequelize,
    `INSERT INTO call_changes (call_id, n, at, from_state, to_state, user_id, actor, reason)
     VALUES (?, ?, ?, ?, ?, ?, ?, ?)`,
    [
      call.id,
      (last?.n ?? 0) + 1,
      // A command that waited for another's to end began before it, and still comes after it.
      last && last.at > job.at ? last.at : job.at,
      from,
      call.state,
      job.actor.userId,
      job.actor.name,
      reason.slice(0, 300),
    ],
    job.tx,
  );
}

/** One remark on a call. */
export async function writeRemark(job: Job, callId: string, text: string): Promise<void> {
  await insert(
    job.sequelize,
    'INSERT INTO remarks (call_id, at, user_id, actor, text) VALUES (?, ?, ?, ?, ?)',
    [callId, job.at, job.actor.userId, job.actor.name, text],
    job.tx,
  );
}
