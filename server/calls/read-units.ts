import type { Transaction } from 'sequelize';
import type { UnitFacts } from '@shared/contract/calls';
import { json } from '../db/sql';
import { ColdUnitRecord, CompartmentRecord } from './cold-unit-record';

/** A unit of a call as it was told, and why each compartment's clock says what it says. */
export interface StoredUnit {
  readonly facts: UnitFacts;
  /** Reasons in words, by compartment in the order of `facts.compartments`. */
  readonly reasons: string[][];
}

/** The units of a call in their order. */
export async function readUnits(callId: string, tx?: Transaction): Promise<StoredUnit[]> {
  const transaction = tx ? { transaction: tx } : {};
  const units = await ColdUnitRecord.findAll({
    where: { callId },
    order: [['placeNo', 'ASC']],
    ...transaction,
  });
  const compartments = await CompartmentRecord.findAll({
    where: { unitId: units.map((unit) => unit.id) },
    order: [['placeNo', 'ASC']],
    ...transaction,
  });
  return units.map((unit) => {
    const inside = compartments.filter((one) => one.unitId === unit.id);
    return {
      facts: {
        id: unit.id,
        kind: unit.kind,
        compressorStart: unit.compressorStart,
        ageYears: unit.ageYears,
        cubicFeet: unit.cubicFeet,
        place: unit.place,
        cooling: unit.cooling,
        ranBetween: unit.ranBetween,
        compartments: inside.map((one) => one.facts as UnitFacts['compartments'][number]),
      },
      reasons: inside.map((one) => json<string[]>(one.reasons)),
    };
  });
}
