import type { TakeCall } from '@shared/contract/calls';
import { Refusal } from '@shared/domain/errors';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import { areaAround } from '../areas/area-of';
import { isDuplicateOf } from '../db/sql';
import type { Job } from '../commands/run-command';
import { readSettings } from '../office/settings';
import { lockOpenStorm } from '../storms/storm-queries';
import { tellCallReceived } from '../texts/tell-customer';
import { CallRecord } from './call-record';
import { callRows } from './call-rows';
import { claim, writeHistory, writeRemark } from './change-call';
import { keepHousehold } from './households';
import { storeUnits } from './store-units';

/** A clock on the caller's desk may run ahead of ours by this much. */
const CLOCK_SLACK_MS = 5 * 60_000;
/** No outage that food still matters in began earlier than this; it would be a slip of the pen. */
const LONGEST_OUTAGE_MS = 45 * 24 * HOUR_MS;

export interface CallToTake extends Omit<TakeCall, 'commandId' | 'phone'> {
  readonly phone: string | null;
  readonly receivedAt: Instant;
  readonly source: CallRecord['source'];
}

/**
 * Takes one call into an open storm. Whoever took it by phone holds the claim.
 *
 * @throws Refusal `household-has-open-call` with that call's row: the same household is one call
 */
export async function takeCall(job: Job, stormId: string, told: CallToTake): Promise<CallRecord> {
  refuseImpossibleTimes(told, job.now);
  const storm = await lockOpenStorm(stormId, job.tx);
  job.inStorm(storm.id);
  const household = told.phone === null ? null : await keepHousehold(job, told.phone, told);
  const area = told.address.lonLat && (await areaAround(job.tx, stormId, told.address.lonLat));
  const followsArea = told.timesFrom === 'area' && area !== null;

  storm.callsTaken += 1;
  await storm.save({ transaction: job.tx });
  const call = CallRecord.build({
    id: told.callId,
    stormId,
    number: storm.callsTaken,
    householdId: household?.id ?? null,
    state: 'new',
    receivedAt: new Date(told.receivedAt),
    name: told.name,
    phone: told.phone,
    addressText: told.address.text,
    unitNo: told.address.unitNo,
    lon: told.address.lonLat?.[0] ?? null,
    lat: told.address.lonLat?.[1] ?? null,
    addressKind: told.address.kind,
    areaId: area?.id ?? null,
    powerOutAt: followsArea ? area.outAt : new Date(told.powerOutAt),
    powerBackAt: followsArea
      ? area.backAt
      : told.powerBackAt === null
        ? null
        : new Date(told.powerBackAt),
    timesFrom: told.timesFrom,
    language: told.language,
    mayText: told.mayText,
    danger: told.danger,
    source: told.source,
    phoneCheck: { answers: {}, startedAt: null, concludedAt: null },
    skills: [],
    parts: [],
    causes: [],
  });
  if (told.source === 'phone')
    claim(job, call, (await readSettings(job.sequelize, job.tx)).claimMinutes);
  await insertCall(job, call);
  await storeUnits(job, call, told.units);
  await writeHistory(job, call, null, told.source === 'phone' ? 'rang' : 'from the night log');
  if (told.remark !== '') await writeRemark(job, call.id, told.remark);
  if (told.source === 'phone' && call.mayText) await tellCallReceived(job, call);
  job.touched.call(call.id);
  job.note('call', call.id, `took call ${String(call.number)}`);
  return call;
}

async function insertCall(job: Job, call: CallRecord): Promise<void> {
  try {
    await call.save({ transaction: job.tx });
  } catch (error) {
    if (!isDuplicateOf(error, 'one_open_call')) throw error;
    const open = await CallRecord.findOne({
      where: { stormId: call.stormId, householdId: call.householdId, settledAt: null },
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

/** @throws Refusal `times-disagree` */
export function refuseImpossibleTimes(
  times: { readonly powerOutAt: Instant; readonly powerBackAt: Instant | null },
  now: Instant,
): void {
  const { powerOutAt, powerBackAt } = times;
  if (powerOutAt > now + CLOCK_SLACK_MS)
    throw new Refusal(
      'times-disagree',
      'The power went out in the future; look at the time again.',
    );
  if (powerOutAt < now - LONGEST_OUTAGE_MS)
    throw new Refusal('times-disagree', 'The power went out more than 45 days ago; look again.');
  if (powerBackAt !== null && powerBackAt < powerOutAt)
    throw new Refusal('times-disagree', 'The power came back before it went out.');
}
