import type { TakeCall } from '@shared/contract/calls';
import { Refusal } from '@shared/domain/errors';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import type { Span } from '@shared/domain/thaw/uncooled-time';
import { areasOf } from '../areas/area-of';
import type { AreaRecord } from '../areas/area-record';
import { insert, isDuplicateOf } from '../db/sql';
import type { Job } from '../commands/run-command';
import { readSettings } from '../office/settings';
import { lockOpenStorm } from '../storms/storm-queries';
import type { StormRecord } from '../storms/storm-record';
import { tellCallReceived } from '../texts/tell-customer';
import { CallRecord } from './call-record';
import { callRows } from './call-rows';
import { claim } from './change-call';
import { keepHouseholds } from './households';
import { storeNewUnits } from './store-units';

/** A clock on the caller's desk may run ahead of ours by this much. */
const CLOCK_SLACK_MS = 5 * 60_000;
/** No outage that food still matters in began earlier than this; it would be a slip of the pen. */
const LONGEST_OUTAGE_MS = 45 * 24 * HOUR_MS;

export interface CallToTake extends Omit<TakeCall, 'commandId' | 'phone'> {
  readonly phone: string | null;
  readonly receivedAt: Instant;
  readonly source: CallRecord['source'];
  /** `false` keeps the number without recognising a household by it. */
  readonly isHousehold?: boolean;
}

/**
 * Takes one call by phone. Whoever takes it holds the claim, and the customer is told.
 *
 * @throws Refusal `household-has-open-call` with that call's row: the same household is one call
 */
export async function takeCall(job: Job, stormId: string, told: CallToTake): Promise<CallRecord> {
  const { claimMinutes } = await readSettings(job.sequelize, job.tx);
  const [call] = await takeCalls(job, stormId, [told], (made) => {
    if (job.actor.userId !== null) claim(job, made, claimMinutes);
  });
  if (!call) throw new Error('a call was told and none was taken');
  if (call.mayText) await tellCallReceived(job, call);
  return call;
}

/**
 * Takes calls into an open storm, all or none: one phone call, or a piece of a night log. Each gets
 * its number, its household, the outage area around it, and its clocks.
 *
 * @throws Refusal `household-has-open-call` with the open call's row
 */
export async function takeCalls(
  job: Job,
  stormId: string,
  told: readonly CallToTake[],
  beforeStoring: (call: CallRecord) => void = () => undefined,
): Promise<CallRecord[]> {
  for (const one of told) refuseImpossibleTimes(one, job.now);
  const storm = await lockOpenStorm(stormId, job.tx);
  job.inStorm(storm.id);
  const areaAt = await areasOf(job.tx, stormId);
  const households = await householdsOf(job, told);

  const calls = told.map((one) => {
    const { lonLat } = one.address;
    const area = lonLat && areaAt(lonLat);
    storm.callsTaken += 1;
    const householdId =
      one.isHousehold === false ? null : (households.get(one.phone ?? '') ?? null);
    const call = CallRecord.build(callFacts(one, storm, area, householdId));
    beforeStoring(call);
    return call;
  });
  await storm.save({ transaction: job.tx });
  await insertCalls(job, calls);
  await storeNewUnits(
    job,
    calls.map((call, i) => ({ call, units: told[i]?.units ?? [] })),
  );
  await writeBeginnings(job, calls, told);
  for (const call of calls) {
    job.touched.call(call.id);
    job.note('call', call.id, `took call ${String(call.number)}`);
  }
  return calls;
}

/** Phone calls replace what is known of a household; a log does not. */
async function householdsOf(job: Job, told: readonly CallToTake[]): Promise<Map<string, string>> {
  const found = new Map<string, string>();
  for (const source of ['person', 'log'] as const) {
    const theirs = told.flatMap((one) =>
      one.phone !== null &&
      one.isHousehold !== false &&
      (one.source === 'night-log') === (source === 'log')
        ? [{ ...one, phone: one.phone }]
        : [],
    );
    for (const [phone, id] of await keepHouseholds(job, theirs, source)) found.set(phone, id);
  }
  return found;
}

function callFacts(
  told: CallToTake,
  storm: StormRecord,
  area: AreaRecord | null,
  householdId: string | null,
) {
  const follows = told.timesFrom === 'area' && area !== null;
  const toldBackAt = told.powerBackAt === null ? null : new Date(told.powerBackAt);
  return {
    id: told.callId,
    stormId: storm.id,
    number: storm.callsTaken,
    householdId,
    state: 'new' as const,
    receivedAt: new Date(told.receivedAt),
    name: told.name,
    phone: told.phone,
    addressText: told.address.text,
    unitNo: told.address.unitNo,
    lon: told.address.lonLat?.[0] ?? null,
    lat: told.address.lonLat?.[1] ?? null,
    addressKind: told.address.kind,
    areaId: area?.id ?? null,
    powerOutAt: follows ? area.outAt : new Date(told.powerOutAt),
    powerBackAt: follows ? area.backAt : toldBackAt,
    powerOnSpans: [...told.powerOnSpans],
    timesFrom: told.timesFrom,
    householdAtRisk: told.householdAtRisk,
    language: told.language,
    mayText: told.mayText,
    danger: told.danger,
    source: told.source,
    phoneCheck: { answers: {}, startedAt: null, concludedAt: null },
    skills: [],
    parts: [],
    causes: [],
  };
}

async function insertCalls(job: Job, calls: readonly CallRecord[]): Promise<void> {
  try {
    await CallRecord.bulkCreate(
      calls.map((call) => call.get({ plain: true })),
      { transaction: job.tx },
    );
    for (const call of calls) call.isNewRecord = false;
  } catch (error) {
    if (!isDuplicateOf(error, 'one_open_call')) throw error;
    const open = await CallRecord.findOne({
      where: {
        stormId: calls[0]?.stormId ?? '',
        householdId: calls.flatMap((call) => call.householdId ?? []),
        settledAt: null,
      },
      transaction: job.tx,
    });
    const [current] = open
      ? await callRows(job.sequelize, { ids: [open.id] }, job.now, job.tx)
      : [];
    throw new Refusal(
      'household-has-open-call',
      `This household is call ${String(open?.number ?? '')} already.`,
      current,
    );
  }
}

/** The first line of each call's history, and its remark. */
async function writeBeginnings(
  job: Job,
  calls: readonly CallRecord[],
  told: readonly CallToTake[],
): Promise<void> {
  const { userId, name } = job.actor;
  await insert(
    job.sequelize,
    `INSERT INTO call_changes (call_id, n, at, from_state, to_state, user_id, actor, reason)
     VALUES ?`,
    [
      calls.map((call) => [
        call.id,
        1,
        job.at,
        null,
        call.state,
        userId,
        name,
        call.source === 'phone' ? 'rang' : 'from the night log',
      ]),
    ],
    job.tx,
  );
  const remarks = calls.flatMap((call, i) => {
    const text = told[i]?.remark ?? '';
    return text === '' ? [] : [[call.id, job.at, userId, name, text]];
  });
  if (remarks.length > 0)
    await insert(
      job.sequelize,
      'INSERT INTO remarks (call_id, at, user_id, actor, text) VALUES ?',
      [remarks],
      job.tx,
    );
}

/** @throws Refusal `times-disagree` */
export function refuseImpossibleTimes(
  times: {
    readonly powerOutAt: Instant;
    readonly powerBackAt: Instant | null;
    readonly powerOnSpans: readonly Span[];
  },
  now: Instant,
): void {
  const { powerOutAt, powerBackAt, powerOnSpans } = times;
  if (powerOutAt > now + CLOCK_SLACK_MS)
    throw new Refusal(
      'times-disagree',
      'The power went out in the future; look at the time again.',
    );
  if (powerOutAt < now - LONGEST_OUTAGE_MS)
    throw new Refusal('times-disagree', 'The power went out more than 45 days ago; look again.');
  if (powerBackAt !== null && powerBackAt < powerOutAt)
    throw new Refusal('times-disagree', 'The power came back before it went out.');
  const last = powerBackAt ?? now + CLOCK_SLACK_MS;
  if (powerOnSpans.some(({ from, to }) => from <= powerOutAt || to > last))
    throw new Refusal(
      'times-disagree',
      'The power was back for a while: that lies between when it went first and when it came back for good.',
    );
}
