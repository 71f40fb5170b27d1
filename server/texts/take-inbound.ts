import { randomUUID } from 'node:crypto';
import { classifyInbound, type Inbound } from '@shared/domain/texts/opt-out';
import { milestoneKey, milestoneText, type MilestoneKind } from '@shared/domain/texts/milestones';
import { CallRecord } from '../calls/call-record';
import { HouseholdRecord } from '../calls/household-record';
import { machine } from '../commands/actor';
import { orderFrom, runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import { change } from '../db/sql';
import { readSettings } from '../office/settings';
import { openStorm } from '../storms/storm-queries';
import { saveMessage } from './change-message';
import { MessageRecord } from './message-record';
import { hasOptedOut, queueText } from './queue-text';
import { companyFacts } from './tell-customer';
import { webhookCommandId } from './webhook-command-id';

export interface InboundText {
  readonly sid: string;
  /** Whose phone it came from, E.164 or a carrier's short number. */
  readonly from: string;
  readonly body: string;
}

/** The column's width; the service's own limit on a text. */
const MAX_BODY_CHARACTERS = 1_600;

/**
 * Takes a text from a phone, once, and does what its words ask for in the same transaction. What is
 * no such word lands unread on the household's open call, or with whoever looks after texts.
 */
export async function takeInbound(context: Context, text: InboundText): Promise<void> {
  const order = orderFrom('takeText', machine('text service'), {
    commandId: webhookCommandId('inbound', text.sid),
    sid: text.sid,
  });
  await runCommand(context, order, async (job) => {
    const wasOptedOut = await hasOptedOut(job, text.from);
    const asks = classifyInbound(text.body, wasOptedOut);
    const call = await openCallOf(job, text.from);
    const message = await land(job, text, asks, call);
    if (asks.kind === 'other') return;
    // One confirmation of an opt-out, however often it is asked for; and HELP sends nothing after it.
    if (asks.kind === 'stop' && !(await optOut(job, text.from))) return;
    if (asks.kind === 'help' && wasOptedOut) return;
    if (asks.kind === 'start') await optIn(job, text.from);
    await answer(job, message, asks, call);
  });
}

/** The newest open call of whoever has this number. */
function openCallOf(job: Job, phone: string): Promise<CallRecord | null> {
  return CallRecord.findOne({
    where: { phone, settledAt: null },
    order: [['receivedAt', 'DESC']],
    transaction: job.tx,
  });
}

async function land(
  job: Job,
  { sid, from, body }: InboundText,
  asks: Inbound,
  call: CallRecord | null,
): Promise<MessageRecord> {
  const stormId = call?.stormId ?? (await openStorm(job.tx))?.id ?? null;
  if (stormId) job.inStorm(stormId);
  // A listed word by itself is dealt with here; a sentence, or "cancel", may mean more than that.
  const needsReading = asks.by !== 'keyword' || asks.mayMeanVisit;
  const message = await MessageRecord.create(
    {
      id: randomUUID(),
      stormId,
      callId: call?.id ?? null,
      phone: from,
      direction: 'in',
      body: readable(body),
      state: 'received',
      at: job.at,
      dueAt: job.at,
      providerSid: sid,
      readAt: needsReading ? null : job.at,
    },
    { transaction: job.tx },
  );
  job.touched.messages.add(message.id);
  if (call) job.touched.call(call.id);
  job.note('message', message.id, `a text came in${asks.kind === 'other' ? '' : `: ${asks.kind}`}`);
  return message;
}

/** @returns whether the phone had not opted out before */
async function optOut(job: Job, phone: string): Promise<boolean> {
  const added = await change(
    job.sequelize,
    'INSERT IGNORE INTO opt_outs (phone, at) VALUES (?, ?)',
    [phone, job.at],
    job.tx,
  );
  const waiting = await MessageRecord.findAll({
    where: { phone, direction: 'out', state: 'new' },
    order: [['id', 'ASC']],
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  for (const message of waiting) {
    if (message.milestone === 'stop-confirmed') continue;
    message.state = 'suppressed';
    message.trouble = 'This phone has opted out of texts.';
    await saveMessage(job, message);
    job.note('message', message.id, 'suppressed');
  }
  return added === 1;
}

async function optIn(job: Job, phone: string): Promise<void> {
  await change(job.sequelize, 'DELETE FROM opt_outs WHERE phone = ?', [phone], job.tx);
}

const ANSWERS: Readonly<Record<Exclude<Inbound['kind'], 'other'>, MilestoneKind>> = {
  stop: 'stop-confirmed',
  start: 'start-confirmed',
  help: 'help',
};

async function answer(
  job: Job,
  message: MessageRecord,
  asks: Inbound,
  call: CallRecord | null,
): Promise<void> {
  if (asks.kind === 'other') return;
  const kind = ANSWERS[asks.kind];
  const settings = await readSettings(job.sequelize, job.tx);
  const language = asks.language ?? call?.language ?? (await languageOf(job, message.phone));
  await queueText(
    job,
    {
      stormId: message.stormId,
      callId: message.callId,
      phone: message.phone,
      // They have just asked for this very answer.
      mayText: true,
      body: milestoneText(kind, language, companyFacts(settings)),
      milestone: kind,
      hoursOf: kind,
      dedupeKey: milestoneKey(message.id, kind, 1),
    },
    settings,
  );
}

async function languageOf(job: Job, phone: string): Promise<'en' | 'es'> {
  const household = await HouseholdRecord.findOne({ where: { phone }, transaction: job.tx });
  return household?.language ?? 'en';
}

/** Without control characters but line breaks, and no longer than can be kept. */
const readable = (body: string): string =>
  [...body.replace(/[^\P{Cc}\n]+/gu, ' ').trim()].slice(0, MAX_BODY_CHARACTERS).join('');
