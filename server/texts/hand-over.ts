import { randomUUID } from 'node:crypto';
import { machine } from '../commands/actor';
import { orderFrom, runCommand, type Job, type Order } from '../commands/run-command';
import type { Context } from '../context';
import { readSettings } from '../office/settings';
import { lockMessage, NothingToDo, saveMessage, unlessDone } from './change-message';
import { holdsLease, renewLease, type Leased } from './lease-texts';
import type { MessageRecord } from './message-record';
import { hasOptedOut, heldUntil } from './queue-text';
import type { OutgoingText } from './send-text';
import { hoursOf, whyOutdated } from './still-due';
import { textDue } from './text-hours';

/** An order of the outbox. A fresh id each time: what may happen once is decided under the row's lock. */
export const outboxOrder = (type: string, messageId: string): Order =>
  orderFrom(type, machine('outbox'), { commandId: randomUUID(), messageId });

/**
 * The last gate before the wire: compares and sets the text from `new` to `sending`, in one
 * transaction with the look at the opt-outs. After this the text is never sent again by itself.
 *
 * @returns what to send now, or `null` when it is not ours to send or must not go
 */
export async function handOver(
  context: Context,
  leased: Leased,
  leaseMs: number,
): Promise<OutgoingText | null> {
  let text: OutgoingText | null = null;
  const isOurs = await unlessDone(
    runCommand(context, outboxOrder('sendText', leased.id), async (job) => {
      text = null;
      const message = await lockMessage(job, leased.id);
      if (message.state !== 'new' || !(await holdsLease(job, leased))) throw new NothingToDo();
      if (await isKeptBack(job, message)) return;

      message.state = 'sending';
      message.attempts += 1;
      message.trouble = null;
      await saveMessage(job, message);
      await renewLease(job, leased, leaseMs);
      job.note('message', message.id, 'is handed to the text service');
      text = { to: message.phone, body: message.body, outboxId: message.id };
    }),
  );
  return isOurs ? text : null;
}

/** Whether something came between the writing of the text and now. */
async function isKeptBack(job: Job, message: MessageRecord): Promise<boolean> {
  const mayFollowStop = message.milestone === 'stop-confirmed';
  const why =
    !mayFollowStop && (await hasOptedOut(job, message.phone))
      ? 'This phone has opted out of texts.'
      : await whyOutdated(job, message);
  if (why !== null) {
    message.state = 'suppressed';
    message.trouble = why;
    await release(job, message);
    job.note('message', message.id, 'suppressed');
    return true;
  }

  const settings = await readSettings(job.sequelize, job.tx);
  const dueAt = textDue(job.now, await hoursOf(job, message), settings, job.zone);
  if (dueAt <= job.now) return false;
  message.dueAt = new Date(dueAt);
  message.trouble = heldUntil(dueAt, job);
  await release(job, message);
  job.note('message', message.id, 'waits for the end of the quiet hours');
  return true;
}

/** Puts back a text of which it is certain that nothing was written to the wire. */
export async function putBack(context: Context, leased: Leased): Promise<void> {
  await unlessDone(
    runCommand(context, outboxOrder('putTextBack', leased.id), async (job) => {
      const message = await lockMessage(job, leased.id);
      if (message.state !== 'sending' || message.claimToken !== leased.token)
        throw new NothingToDo();
      message.state = 'new';
      await release(job, message);
      job.note('message', message.id, 'is put back: nothing was handed over');
    }),
  );
}

async function release(job: Job, message: MessageRecord): Promise<void> {
  message.claimToken = null;
  message.claimUntil = null;
  await saveMessage(job, message);
}
