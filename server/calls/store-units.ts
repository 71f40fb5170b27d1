import type { UnitFacts } from '@shared/contract/calls';
import type { Job } from '../commands/run-command';
import { change } from '../db/sql';
import type { CallRecord } from './call-record';
import { ColdUnitRecord, CompartmentRecord } from './cold-unit-record';
import { woundClock } from './wound-clock';

/** Writes a call's units anew, with the clocks that follow from the facts. */
export async function storeUnits(
  job: Job,
  call: CallRecord,
  units: readonly UnitFacts[],
): Promise<void> {
  await removeUnits(job, call.id);
  await storeNewUnits(job, [{ call, units }]);
}

/** Writes the units of calls that have none yet. */
export async function storeNewUnits(
  job: Job,
  calls: readonly { readonly call: CallRecord; readonly units: readonly UnitFacts[] }[],
): Promise<void> {
  await ColdUnitRecord.bulkCreate(
    calls.flatMap(({ call, units }) =>
      units.map((unit, placeNo) => ({
        id: unit.id,
        callId: call.id,
        placeNo,
        kind: unit.kind,
        compressorStart: unit.compressorStart,
        ageYears: unit.ageYears,
        cubicFeet: unit.cubicFeet,
        place: unit.place,
        cooling: unit.cooling,
        ranBetween: unit.ranBetween,
      })),
    ),
    { transaction: job.tx },
  );
  await CompartmentRecord.bulkCreate(
    calls.flatMap(({ call, units }) =>
      units.flatMap((unit) =>
        unit.compartments.map((facts, placeNo) => ({
          unitId: unit.id,
          placeNo,
          kind: facts.kind,
          facts,
          valueCents: facts.valueCents,
          ...woundClock(call.powerTimes(), unit, facts),
        })),
      ),
    ),
    { transaction: job.tx },
  );
}

/** Works the clocks out again after the times of a call have moved. */
export async function windClocks(job: Job, call: CallRecord): Promise<void> {
  const units = await ColdUnitRecord.findAll({
    where: { callId: call.id },
    transaction: job.tx,
  });
  const compartments = await CompartmentRecord.findAll({
    where: { unitId: units.map((unit) => unit.id) },
    transaction: job.tx,
  });
  const unitOf = new Map(units.map((unit) => [unit.id, unit]));
  for (const one of compartments) {
    const unit = unitOf.get(one.unitId);
    if (!unit) continue;
    one.set(woundClock(call.powerTimes(), unit, one.facts));
    await one.save({ transaction: job.tx });
  }
}

async function removeUnits(job: Job, callId: string): Promise<void> {
  await change(
    job.sequelize,
    'DELETE k FROM compartments k JOIN cold_units u ON u.id = k.unit_id WHERE u.call_id = ?',
    [callId],
    job.tx,
  );
  await change(job.sequelize, 'DELETE FROM cold_units WHERE call_id = ?', [callId], job.tx);
}
