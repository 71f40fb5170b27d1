import { Op } from 'sequelize';
import {
  mayMessageBecome,
  OPTED_OUT_CODE,
  retryDelayMs,
  type MessageState,
} from '@shared/domain/texts/message-state';
import { runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import { change, insert } from '../db/sql';
import { applyReports, parkedReports } from './apply-reports';
import { lockMessage, NothingToDo, outgoingState, saveMessage, unlessDone } from './change-message';
import { outboxOrder } from './hand-over';
import type { Leased } from './lease-texts';
import { MessageRecord } from './message-record';
import type { SendResult } from './send-text';

/** How soon after its fate was lost a text is asked after: a callback may come first. */
const FIRST_LOOK_MS = 1_000;

/** Writes down how a hand-over ended. @param roll a number from 0 up to, not including, 1 */
export async function recordResult(
  context: Context,
  leased: Leased,
  result: SendResult,
  roll: number,
): Promise<void> {
  await unlessDone(
    runCommand(context, outboxOrder('recordText', leased.id), async (job) => {
      const message = await lockMessage(job, leased.id);
      if (result.outcome === 'accepted') return accepted(job, message, result.sid, result.status);
      // Whoever else has touched it since knows more than a failure tells.
      if (message.claimToken !== leased.token) throw new NothingToDo();
      if (result.outcome === 'unknown') return lost(job, message, result.why);
      return refused(job, message, result, roll);
    }),
  );
}

/** The service has it; that is true whatever we had thought meanwhile. */
export async function accepted(
  job: Job,
  message: MessageRecord,
  sid: string,
  status: string,
): Promise<void> {
  const answer = ['accepted', status].map((word) => ({ status: word, errorCode: null }));
  await applyReports(job, message, sid, [...answer, ...(await parkedReports(job, sid))]);
}

async function refused(
  job: Job,
  message: MessageRecord,
  result: Extract<SendResult, { outcome: 'refused' }>,
  roll: number,
): Promise<void> {
  const delayMs = result.retryable ? retryDelayMs(message.attempts, roll) : null;
  const optsOut = result.code === OPTED_OUT_CODE;
  const to: MessageState = delayMs !== null ? 'new' : optsOut ? 'suppressed' : 'failed';
  // A text whose lease had lapsed is a person's to send again, even if it turns out as refused.
  if (message.state === 'unknown' && to === 'new') throw new NothingToDo();
  if (!mayMessageBecome(outgoingState(message), to)) throw new NothingToDo();
  if (optsOut) await followOptOut(job, message.phone);
  message.state = to;
  message.trouble = result.words.slice(0, 300);
  message.claimToken = null;
  message.claimUntil = null;
  if (delayMs !== null) message.dueAt = new Date(job.now + delayMs);
  await saveMessage(job, message);
  job.note('message', message.id, to === 'new' ? 'was refused for now' : to);
}

/** The service knows of an opt-out that never reached us. */
async function followOptOut(job: Job, phone: string): Promise<void> {
  await insert(
    job.sequelize,
    'INSERT INTO opt_outs (phone, at) VALUES (?, ?) ON DUPLICATE KEY UPDATE phone = phone',
    [phone, job.at],
    job.tx,
  );
}

/** It may or may not have been taken. The lease's end is kept: it tells when the hand-over was. */
async function lost(job: Job, message: MessageRecord, why: string): Promise<void> {
  if (message.state !== 'sending') throw new NothingToDo();
  message.state = 'unknown';
  message.trouble = why.slice(0, 300);
  message.claimToken = null;
  await saveMessage(job, message);
  await change(
    job.sequelize,
    'UPDATE messages SET due_at = UTC_TIMESTAMP(3) + INTERVAL ? MICROSECOND WHERE id = ?',
    [FIRST_LOOK_MS * 1000, message.id],
    job.tx,
  );
  job.note('message', message.id, 'unknown');
}

/** Finds texts that some sender took and never came back with, and calls them unknown. */
export async function giveUpLapsed(context: Context): Promise<void> {
  const { sequelize } = context;
  const lapsed = {
    state: 'sending' as const,
    // One without a lease is no one's, however it came to be.
    [Op.or]: [{ claimUntil: null }, { claimUntil: { [Op.lt]: sequelize.fn('UTC_TIMESTAMP', 3) } }],
  };
  const found = await MessageRecord.findAll({ attributes: ['id'], where: lapsed, limit: 50 });
  for (const { id } of found)
    await unlessDone(
      runCommand(context, outboxOrder('giveUpText', id), async (job) => {
        const message = await lockMessage(job, id);
        const isStill = await MessageRecord.count({
          where: { id, ...lapsed },
          transaction: job.tx,
        });
        if (isStill === 0) throw new NothingToDo();
        await lost(job, message, 'The sender stopped before the text service had answered.');
      }),
    );
}
