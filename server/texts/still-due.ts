import { MINUTE_MS } from '@shared/domain/instant';
import { MILESTONE_KINDS, type MilestoneKind } from '@shared/domain/texts/milestones';
import { isSettled, type CallState } from '@shared/domain/call-state';
import type { Job } from '../commands/run-command';
import { select } from '../db/sql';
import type { MessageRecord } from './message-record';

/** A text that goes within this time of being written is not looked at again: our choice. */
const FRESH_MS = 2 * MINUTE_MS;

/** Why a text that had to wait is not true any more, in words; `null` while it still is. */
export async function whyOutdated(job: Job, message: MessageRecord): Promise<string | null> {
  if (job.now - message.at.getTime() < FRESH_MS) return null;
  if (message.milestone === 'on-the-way' || message.milestone === 'eta-moved') {
    const [stop] = await select<{ state: string }>(
      job.sequelize,
      'SELECT state FROM stops WHERE id = ?',
      [message.dedupeKey?.split(':')[0] ?? ''],
      job.tx,
    );
    return stop?.state === 'travelling' ? null : 'The technician was no longer on the way.';
  }
  if (message.milestone === 'call-received') {
    const state = await callState(job, message.callId);
    return state && isSettled(state) ? 'The call was settled before it could go.' : null;
  }
  return null;
}

/**
 * Under which quiet hours a text stands. A person's own words pass while a technician drives to
 * the household or stands at its door, and wait for the morning like any notice otherwise.
 */
export async function hoursOf(
  job: Job,
  text: { readonly milestone?: string | null; readonly callId?: string | null },
): Promise<MilestoneKind> {
  const kind = MILESTONE_KINDS.find((one) => one === text.milestone);
  if (kind) return kind;
  const state = await callState(job, text.callId);
  return state === 'travelling' || state === 'on-site' ? 'on-the-way' : 'call-received';
}

async function callState(
  job: Job,
  callId: string | null | undefined,
): Promise<CallState | undefined> {
  if (!callId) return undefined;
  const [call] = await select<{ state: CallState }>(
    job.sequelize,
    'SELECT state FROM calls WHERE id = ?',
    [callId],
    job.tx,
  );
  return call?.state;
}
