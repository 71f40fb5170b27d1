import type { AmendCall } from '@shared/contract/calls';
import { isSettled } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import { areaAround } from '../areas/area-of';
import type { Job } from '../commands/run-command';
import { isDuplicateOf } from '../db/sql';
import type { CallRecord } from './call-record';
import { lockCall, refuseIfClaimedByAnother, saveCall } from './change-call';
import { keepHouseholds } from './households';
import { storeUnits, windClocks } from './store-units';
import { refuseImpossibleTimes } from './take-call';

/**
 * Corrects a call or adds to it: who, where, since when, what stands there, what a thermometer
 * says now. Clocks are wound anew.
 *
 * @throws Refusal when the call is settled, held by another, or has changed meanwhile
 */
export async function amendCall(job: Job, callId: string, told: AmendCall): Promise<CallRecord> {
  const call = await lockCall(job, callId, told.version);
  refuseIfClaimedByAnother(job, call);
  if (isSettled(call.state))
    throw new Refusal('call-not-open', `Call ${String(call.number)} is settled.`);

  if (told.name !== undefined) call.name = told.name;
  if (told.language !== undefined) call.language = told.language;
  if (told.mayText !== undefined) call.mayText = told.mayText;
  if (told.householdAtRisk !== undefined) call.householdAtRisk = told.householdAtRisk;
  if (told.phone !== undefined) call.phone = told.phone;
  if (told.address !== undefined)
    call.set({
      addressText: told.address.text,
      unitNo: told.address.unitNo,
      lon: told.address.lonLat?.[0] ?? null,
      lat: told.address.lonLat?.[1] ?? null,
      addressKind: told.address.kind,
    });
  if (call.phone !== null) {
    const { phone, name, language, mayText } = call;
    const told = [{ phone, name, address: call.address(), language, mayText }];
    call.householdId = (await keepHouseholds(job, told, 'person')).get(phone) ?? null;
  }
  const timesMoved = await setTimes(job, call, told);

  await save(job, call);
  if (told.units) await storeUnits(job, call, told.units);
  else if (timesMoved) await windClocks(job, call);
  job.note('call', call.id, `amended ${changedFields(told).join(', ') || 'nothing'}`);
  return call;
}

/** Times follow the outage area where the call says so and there is one. */
async function setTimes(job: Job, call: CallRecord, told: AmendCall): Promise<boolean> {
  const before = timesOf(call);
  if (told.timesFrom !== undefined) call.timesFrom = told.timesFrom;
  if (told.powerOutAt !== undefined) call.powerOutAt = new Date(told.powerOutAt);
  if (told.powerBackAt !== undefined)
    call.powerBackAt = told.powerBackAt === null ? null : new Date(told.powerBackAt);
  if (told.powerOnSpans !== undefined) call.powerOnSpans = [...told.powerOnSpans];
  const { lon, lat } = call;
  const area =
    lon === null || lat === null ? null : await areaAround(job.tx, call.stormId, [lon, lat]);
  call.areaId = area?.id ?? null;
  if (area && call.timesFrom === 'area') {
    call.powerOutAt = area.outAt;
    call.powerBackAt = area.backAt;
  }
  refuseImpossibleTimes(
    {
      powerOutAt: call.powerOutAt.getTime(),
      powerBackAt: call.powerBackAt?.getTime() ?? null,
      // Told before an outage area's times moved, they may lie outside now; the clock cuts them.
      powerOnSpans: told.powerOnSpans ?? [],
    },
    job.now,
  );
  return before !== timesOf(call);
}

const timesOf = ({ powerOutAt, powerBackAt, powerOnSpans }: CallRecord): string =>
  JSON.stringify([powerOutAt.getTime(), powerBackAt?.getTime(), powerOnSpans]);

async function save(job: Job, call: CallRecord): Promise<void> {
  try {
    await saveCall(job, call);
  } catch (error) {
    if (isDuplicateOf(error, 'one_open_call'))
      throw new Refusal(
        'household-has-open-call',
        'Another open call has this phone number already.',
      );
    throw error;
  }
}

const changedFields = ({ commandId: _id, version: _version, ...fields }: AmendCall): string[] =>
  Object.entries(fields)
    .filter(([, value]) => value !== undefined)
    .map(([name]) => name);
