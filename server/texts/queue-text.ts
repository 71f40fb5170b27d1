import { randomUUID } from 'node:crypto';
import type { Settings } from '@shared/contract/office';
import type { MilestoneKind } from '@shared/domain/texts/milestones';
import { textLength } from '@shared/domain/texts/segments';
import type { Job } from '../commands/run-command';
import { isDuplicateOf, select } from '../db/sql';
import { MessageRecord } from './message-record';
import { textDue, wallClock } from './text-hours';

export interface TextToQueue {
  readonly stormId: string | null;
  readonly callId: string | null;
  /** E.164; `null` when nobody knows one. */
  readonly phone: string | null;
  /** Whether whoever answers there agreed to texts. */
  readonly mayText: boolean;
  readonly body: string;
  /** `null` for what a person wrote. */
  readonly milestone: MilestoneKind | null;
  /** Under which quiet hours it stands; a person's words are held like any other notice. */
  readonly hoursOf: MilestoneKind;
  /** Under which it exists once; `null` for what a person wrote, whose command id serves. */
  readonly dedupeKey: string | null;
}

/**
 * Puts one text into the outbox, in the transaction of whatever it tells of. A text that may not
 * be sent is written all the same, as suppressed, so that nothing is forgotten in silence.
 *
 * @returns `null` when there is a text under that key already
 */
export async function queueText(
  job: Job,
  text: TextToQueue,
  settings: Settings,
): Promise<MessageRecord | null> {
  const why = await whyNot(job, text);
  const dueAt = textDue(job.now, text.hoursOf, settings, job.zone);
  const message = MessageRecord.build({
    id: randomUUID(),
    stormId: text.stormId,
    callId: text.callId,
    phone: text.phone ?? '',
    direction: 'out',
    body: text.body,
    state: why === null ? 'new' : 'suppressed',
    milestone: text.milestone,
    dedupeKey: text.dedupeKey,
    segments: textLength(text.body).segments,
    at: job.at,
    dueAt: new Date(dueAt),
    trouble: why ?? heldUntil(dueAt, job),
  });
  try {
    await message.save({ transaction: job.tx });
  } catch (error) {
    if (isDuplicateOf(error, 'told_once')) return null;
    throw error;
  }
  job.touched.messages.add(message.id);
  return message;
}

/** What a person reads beside a text that waits for the morning. */
export const heldUntil = (dueAt: number, job: { now: number; zone: string }): string | null =>
  dueAt > job.now ? `Quiet hours: it goes at ${wallClock(dueAt, job.zone)}.` : null;

async function whyNot(job: Job, text: TextToQueue): Promise<string | null> {
  if (text.phone === null || text.phone === '') return 'There is no phone number to text.';
  if (text.milestone === 'stop-confirmed') return null;
  if (await hasOptedOut(job, text.phone)) return 'This phone has opted out of texts.';
  return text.mayText ? null : 'The household did not agree to texts.';
}

export async function hasOptedOut(job: Job, phone: string): Promise<boolean> {
  const rows = await select(
    job.sequelize,
    'SELECT 1 FROM opt_outs WHERE phone = ?',
    [phone],
    job.tx,
  );
  return rows.length > 0;
}
