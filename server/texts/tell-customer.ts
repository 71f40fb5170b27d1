import { Op } from 'sequelize';
import type { Settings } from '@shared/contract/office';
import type { Instant } from '@shared/domain/instant';
import { formatPhone } from '@shared/domain/phone-number';
import { etaMove, ETA_TEXT_GAP_MINUTES, toldWindow } from '@shared/domain/texts/eta-moved';
import {
  milestoneKey,
  milestoneText,
  type MilestoneFacts,
  type MilestoneKind,
} from '@shared/domain/texts/milestones';
import { textLength } from '@shared/domain/texts/segments';
import type { CallRecord } from '../calls/call-record';
import type { Job } from '../commands/run-command';
import { readSettings } from '../office/settings';
import type { StopRecord } from '../routes/stop-record';
import { TechnicianRecord } from '../technicians/technician-record';
import { MessageRecord } from './message-record';
import { queueText } from './queue-text';
import { windowInWords } from './text-hours';

/** A call that came in is told to its caller, once. */
export async function tellCallReceived(job: Job, call: CallRecord): Promise<void> {
  await tell(job, call, 'call-received', milestoneKey(call.id, 'call-received', 1), {});
}

/** A call that runs again after the phone check is told so, once. */
export async function tellSettledByPhone(job: Job, call: CallRecord): Promise<void> {
  await tell(job, call, 'settled-by-phone', milestoneKey(call.id, 'settled-by-phone', 1), {});
}

/**
 * Tells that the technician is driving and when to expect them. A stop that is driven to again
 * after a halt is told only if its arrival time has moved.
 */
export async function tellOnTheWay(job: Job, call: CallRecord, stop: StopRecord): Promise<void> {
  if (stop.toldEtaAt !== null && stop.toldEtaAt !== undefined)
    return tellEtaIfMoved(job, call, stop);
  await tellArrival(job, call, stop, 'on-the-way', milestoneKey(stop.id, 'on-the-way', 1));
}

/**
 * Tells a new arrival time when it is too far from the one that the customer was told. Within the
 * gap after the last such text it waits; what waits is kept to the newest arrival time.
 */
export async function tellEtaIfMoved(job: Job, call: CallRecord, stop: StopRecord): Promise<void> {
  if (!stop.toldEtaAt) return;
  const eta = etaOf(stop);
  if (eta === stop.toldEtaAt.getTime()) return;
  const texts = await MessageRecord.findAll({
    where: { dedupeKey: { [Op.like]: `${stop.id}:%` } },
    order: [
      ['at', 'DESC'],
      ['id', 'DESC'],
    ],
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  const waiting = texts.find((text) => text.state === 'new');
  if (waiting) return retell(job, call, stop, waiting);

  const settings = await readSettings(job.sequelize, job.tx);
  const told = { eta: stop.toldEtaAt.getTime(), at: lastTold(texts[0]) };
  const move = etaMove(told, eta, job.now, {
    movedMinutes: settings.etaMovedMinutes,
    gapMinutes: ETA_TEXT_GAP_MINUTES,
  });
  if (move.text === 'none') return;
  const n = texts.filter((text) => text.milestone === 'eta-moved').length + 1;
  const notBefore = move.text === 'later' ? move.notBefore : job.now;
  await tellArrival(job, call, stop, 'eta-moved', milestoneKey(stop.id, 'eta-moved', n), notBefore);
}

async function tellArrival(
  job: Job,
  call: CallRecord,
  stop: StopRecord,
  kind: 'on-the-way' | 'eta-moved',
  key: string,
  notBefore: Instant = job.now,
): Promise<void> {
  const message = await tell(job, call, kind, key, await arrivalFacts(job, call, stop));
  if (message?.state === 'new' && message.dueAt.getTime() < notBefore) {
    message.dueAt = new Date(notBefore);
    await message.save({ transaction: job.tx });
  }
  await rememberTold(job, stop);
}

/** The text has not gone yet: it goes with the arrival time of now. */
async function retell(
  job: Job,
  call: CallRecord,
  stop: StopRecord,
  waiting: MessageRecord,
): Promise<void> {
  const kind = waiting.milestone === 'on-the-way' ? 'on-the-way' : 'eta-moved';
  const settings = await readSettings(job.sequelize, job.tx);
  const facts = await arrivalFacts(job, call, stop);
  waiting.body = textFor(kind, call, settings, facts);
  waiting.segments = textLength(waiting.body).segments;
  waiting.version = (waiting.version ?? 0) + 1;
  await waiting.save({ transaction: job.tx });
  job.touched.messages.add(waiting.id);
  await rememberTold(job, stop);
}

async function tell(
  job: Job,
  call: CallRecord,
  kind: MilestoneKind,
  dedupeKey: string,
  facts: Partial<MilestoneFacts>,
): Promise<MessageRecord | null> {
  const settings = await readSettings(job.sequelize, job.tx);
  return queueText(
    job,
    {
      stormId: call.stormId,
      callId: call.id,
      phone: call.phone ?? null,
      mayText: call.mayText,
      body: textFor(kind, call, settings, facts),
      milestone: kind,
      hoursOf: kind,
      dedupeKey,
    },
    settings,
  );
}

const textFor = (
  kind: MilestoneKind,
  call: CallRecord,
  settings: Settings,
  facts: Partial<MilestoneFacts>,
): string => milestoneText(kind, call.language, { ...companyFacts(settings), ...facts });

export const companyFacts = (
  settings: Settings,
): Pick<MilestoneFacts, 'company' | 'companyPhone'> => ({
  company: settings.companyName,
  companyPhone: formatPhone(settings.companyPhone),
});

async function arrivalFacts(
  job: Job,
  call: CallRecord,
  stop: StopRecord,
): Promise<Partial<MilestoneFacts>> {
  const technician = await TechnicianRecord.findByPk(stop.technicianId, { transaction: job.tx });
  return {
    eta: windowInWords(toldWindow(etaOf(stop)), call.language, job.zone),
    // A stranger at the door is known by the given name; more is nobody's business.
    technician: technician?.name.trim().split(/\s+/)[0] ?? '',
  };
}

async function rememberTold(job: Job, stop: StopRecord): Promise<void> {
  stop.toldEtaAt = new Date(etaOf(stop));
  await stop.save({ fields: ['toldEtaAt'], transaction: job.tx });
  job.touched.stop(stop.id);
}

/** A text that had to wait was told when it went, not when it was written. */
const lastTold = (text: MessageRecord | undefined): Instant => {
  if (!text) return 0;
  // The due time of an unknown one is when to ask after it.
  return text.state === 'unknown' ? text.at.getTime() : text.dueAt.getTime();
};

const etaOf = (stop: StopRecord): Instant => (stop.etaAt ?? stop.arriveAt).getTime();
