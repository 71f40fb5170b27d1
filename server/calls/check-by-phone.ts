import type { z } from 'zod';
import type {
  AnswerPhoneCheck,
  ConcludeCall,
  ReturnToWaiting,
  UnitFacts,
} from '@shared/contract/calls';
import { isSettled, mayFollow } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import { UNIT_WORDS } from '@shared/domain/cold-unit';
import {
  answersOf,
  causeWords,
  concludeCall as concludeUnits,
} from '@shared/domain/phone-check/call-check';
import { coolingHeard } from '@shared/domain/phone-check/cooling-heard';
import type { Job } from '../commands/run-command';
import { readSettings } from '../office/settings';
import { leaveRoute, lockRouteOf } from '../routes/leave-route';
import { tellSettledByPhone } from '../texts/tell-customer';
import { CallRecord } from './call-record';
import {
  claim,
  lockCall,
  moveCall,
  refuseIfClaimedByAnother,
  releaseClaim,
  saveCall,
  saveClaim,
} from './change-call';
import { readUnits } from './read-units';
import { storeUnits } from './store-units';

/** Takes or keeps the claim. A call that nobody has checked yet is then being checked. */
export async function claimCall(job: Job, callId: string): Promise<CallRecord> {
  const call = await lockCall(job, callId);
  refuseIfClaimedByAnother(job, call);
  refuseIfSettled(call);
  const { claimMinutes } = await readSettings(job.sequelize, job.tx);
  claim(job, call, claimMinutes);
  if (call.state === 'new') {
    await moveCall(job, call, 'checking', 'claimed');
    await saveCall(job, call);
  } else await saveClaim(job, call);
  job.note('call', call.id, 'claimed the call');
  return call;
}

/** Gives the claim back; a check that came to no end leaves the call as new. */
export async function releaseCall(job: Job, callId: string): Promise<CallRecord> {
  const call = await lockCall(job, callId);
  refuseIfClaimedByAnother(job, call);
  releaseClaim(call);
  if (call.state === 'checking') {
    await moveCall(job, call, 'new', 'claim given back');
    await saveCall(job, call);
  } else await saveClaim(job, call);
  job.note('call', call.id, 'gave the claim back');
  return call;
}

/** Saves the answers so far. Whoever answers holds the claim. */
export async function answerPhoneCheck(
  job: Job,
  callId: string,
  { answers, version }: AnswerPhoneCheck,
): Promise<CallRecord> {
  const call = await lockCall(job, callId, version);
  refuseIfClaimedByAnother(job, call);
  refuseIfSettled(call);
  const { claimMinutes } = await readSettings(job.sequelize, job.tx);
  claim(job, call, claimMinutes);
  if (call.state === 'new') await moveCall(job, call, 'checking', 'phone check begun');
  call.phoneCheck = {
    answers,
    startedAt: call.phoneCheck.startedAt ?? job.now,
    concludedAt: null,
  };
  await drawConclusions(job, call);
  await saveCall(job, call);
  job.note('call', call.id, answeredWords(Object.keys(answers).length));
  return call;
}

/** Ends the check: settled by phone, or waiting for a visit with what it will need. */
export async function concludeCall(
  job: Job,
  callId: string,
  { outcome, reason, version, duplicateOfId }: ConcludeCall,
): Promise<CallRecord> {
  await lockRouteOf(job, callId);
  const call = await lockCall(job, callId, version);
  refuseIfClaimedByAnother(job, call);
  if (outcome === 'duplicate') call.duplicateOfId = await originalOf(job, call, duplicateOfId);

  await drawConclusions(job, call);
  call.phoneCheck = { ...call.phoneCheck, concludedAt: job.now };
  const words = reason || OUTCOME_REASONS[outcome];
  if (!(outcome === 'waiting' && call.state === 'waiting')) {
    // Checked before the stop is taken away, so that a refusal leaves the route alone.
    if (!mayFollow(call.state, outcome)) await moveCall(job, call, outcome, words);
    await leaveRoute(job, call, `Call ${String(call.number)}: ${words}`);
    await moveCall(job, call, outcome, words);
  }
  releaseClaim(call);
  await saveCall(job, call);
  if (outcome === 'running-again') await tellSettledByPhone(job, call);
  job.note('call', call.id, `ended the phone check: ${outcome}`);
  return call;
}

/** Ordered parts have come, or somebody is at home now: back in the queue. */
export async function returnToWaiting(
  job: Job,
  callId: string,
  version: number,
  { reason, window }: Pick<z.output<typeof ReturnToWaiting>, 'reason' | 'window'>,
): Promise<CallRecord> {
  const call = await lockCall(job, callId, version);
  if (window && !(window.to > window.from && window.to > job.now))
    throw new Refusal(
      'times-disagree',
      'The agreed window has to end after it begins, and from now on.',
    );
  if (call.state !== 'parts-on-order' && call.state !== 'no-access')
    throw new Refusal(
      'illegal-transition',
      'Only a call with parts on order or without access goes back to waiting this way.',
    );
  await moveCall(job, call, 'waiting', reason);
  call.windowFrom = window ? new Date(window.from) : null;
  call.windowTo = window ? new Date(window.to) : null;
  await saveCall(job, call);
  job.note(
    'call',
    call.id,
    window
      ? 'put the call back in the queue with an agreed window'
      : 'put the call back in the queue',
  );
  return call;
}

const OUTCOME_REASONS: Readonly<Record<ConcludeCall['outcome'], string>> = {
  'running-again': 'runs again after the phone check',
  referred: 'referred to another trade',
  cancelled: 'cancelled by the customer',
  duplicate: 'the same household is another call',
  waiting: 'needs a visit',
};

function answeredWords(count: number): string {
  if (count === 0) return 'took the answers back';
  return `answered ${String(count)} ${count === 1 ? 'question' : 'questions'}`;
}

/**
 * What the answers about all units point to: danger, likely causes, the parts and skills of a visit. What
 * a unit was said to do is a fact of its clocks as well.
 */
async function drawConclusions(job: Job, call: CallRecord): Promise<void> {
  const units = (await readUnits(call.id, job.tx)).map(({ facts }) => facts);
  const { answers } = call.phoneCheck;
  const found = concludeUnits(answers, units);
  if (!found) return;
  call.danger = call.danger || found.danger !== null;
  call.skills = [...found.skills];
  call.parts = [...found.parts];
  call.causes = [...causeWords(found, ({ id }) => nameOf(units.find((unit) => unit.id === id)))];

  const heard = units.map((unit) => ({
    ...unit,
    cooling: coolingHeard(answersOf(answers, unit, units)) ?? unit.cooling,
  }));
  if (heard.some(({ cooling }, i) => cooling !== units[i]?.cooling))
    await storeUnits(job, call, heard);
}

const nameOf = (unit: UnitFacts | undefined): string => {
  if (!unit) return '';
  return unit.place === '' ? UNIT_WORDS[unit.kind] : `${UNIT_WORDS[unit.kind]}, ${unit.place}`;
};

async function originalOf(
  job: Job,
  call: CallRecord,
  duplicateOfId: string | undefined,
): Promise<string> {
  const original = duplicateOfId
    ? await CallRecord.findByPk(duplicateOfId, { transaction: job.tx })
    : null;
  if (!original || original.stormId !== call.stormId || original.id === call.id)
    throw new Refusal('not-found', 'Say which other call of this storm stays.');
  if (original.state === 'duplicate')
    throw new Refusal('illegal-transition', 'That call is itself a duplicate of another.');
  return original.id;
}

function refuseIfSettled(call: CallRecord): void {
  if (isSettled(call.state))
    throw new Refusal('call-not-open', `Call ${String(call.number)} is settled.`);
}
