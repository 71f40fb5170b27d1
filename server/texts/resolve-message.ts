import type { MessageDto } from '@shared/contract/messages';
import { Refusal } from '@shared/domain/errors';
import { MILESTONE_KINDS } from '@shared/domain/texts/milestones';
import { CallRecord } from '../calls/call-record';
import type { Job } from '../commands/run-command';
import { readSettings } from '../office/settings';
import { lockMessage, saveMessage } from './change-message';
import type { MessageRecord } from './message-record';
import { toMessageDto } from './message-rows';
import { hasOptedOut, queueText } from './queue-text';
import { hoursOf } from './still-due';

export interface Decision {
  readonly version: number;
  readonly decision: 'send-again' | 'was-sent' | 'give-up';
}

/**
 * A person's word on a text that needs one. The old text is closed by it; one that is to be sent
 * again goes as a new text of its own, so that the old one can never go twice.
 *
 * @returns the old text
 */
export async function resolveMessage(
  job: Job,
  messageId: string,
  { version, decision }: Decision,
): Promise<MessageDto> {
  const message = await lockMessage(job, messageId, version);
  if (message.direction === 'in') return seen(job, message, decision);
  if (!['unknown', 'failed', 'undelivered'].includes(message.state) || message.readAt)
    throw new Refusal('illegal-transition', 'There is nothing to decide about this text.');

  if (decision === 'was-sent') {
    if (message.state !== 'unknown')
      throw new Refusal('illegal-transition', 'The text service says that it did not go.');
    message.state = 'sent';
    message.trouble = 'A person says that it was sent.';
  } else {
    if (decision === 'send-again') await sendAgain(job, message);
    if (message.state === 'unknown') message.state = 'failed';
    message.trouble =
      decision === 'send-again' ? 'Sent again as a new text.' : 'Given up by a person.';
  }
  await close(job, message);
  job.note('message', message.id, `decided: ${decision}`);
  return toMessageDto(message);
}

/** A reply that belongs to no call is dealt with once somebody has looked after it. */
async function seen(
  job: Job,
  message: MessageRecord,
  decision: Decision['decision'],
): Promise<MessageDto> {
  if (decision !== 'give-up')
    throw new Refusal('illegal-transition', 'A text from a customer can only be put aside.');
  await close(job, message);
  if (message.callId) job.touched.call(message.callId);
  job.note('message', message.id, 'put aside');
  return toMessageDto(message);
}

async function close(job: Job, message: MessageRecord): Promise<void> {
  message.readAt = job.at;
  message.claimToken = null;
  await saveMessage(job, message);
}

async function sendAgain(job: Job, old: MessageRecord): Promise<void> {
  const { phone } = old;
  if (await hasOptedOut(job, phone))
    throw new Refusal('opted-out', 'This phone has opted out of texts; ring it instead.');
  const call = old.callId ? await CallRecord.findByPk(old.callId, { transaction: job.tx }) : null;
  const text = {
    stormId: old.stormId ?? null,
    callId: old.callId ?? null,
    phone,
    mayText: call?.mayText ?? true,
    body: old.body,
    milestone: MILESTONE_KINDS.find((kind) => kind === old.milestone) ?? null,
    hoursOf: await hoursOf(job, old),
    dedupeKey: keyOfNext(old),
  };
  const again = await queueText(job, text, await readSettings(job.sequelize, job.tx));
  if (!again) throw new Refusal('illegal-transition', 'It was sent again already.');
  job.note('message', again.id, 'written again');
}

/** What a person wrote had no key; its own id makes one, so that each text is sent again once. */
function keyOfNext(old: MessageRecord): string {
  const [key, times] = (old.dedupeKey ?? old.id).split(':again:');
  return `${key ?? ''}:again:${String(Number(times ?? 0) + 1)}`;
}
