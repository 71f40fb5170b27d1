import type { Sequelize, Transaction } from 'sequelize';
import type { CompartmentRow } from '@shared/contract/calls';
import type { UnitKind } from '@shared/domain/cold-unit';
import { select } from '../db/sql';

export interface UnitRow {
  id: string;
  kind: UnitKind;
  /** Where it stands, in the caller's words. */
  place: string;
  compartments: CompartmentRow[];
}

interface Stored {
  call_id: string;
  unit_id: string;
  unit_kind: UnitKind;
  place: string;
  kind: CompartmentRow['kind'];
  value_cents: number;
  at_risk_at: Date;
  earliest_at: Date;
  likely_at: Date | null;
  save_by_at: Date | null;
}

/** The units of calls with their clocks, by call, in the order in which they were told. */
export async function unitRows(
  sequelize: Sequelize,
  which: { readonly callIds: readonly string[] } | { readonly stormId: string },
  tx?: Transaction,
): Promise<Map<string, UnitRow[]>> {
  if ('callIds' in which && which.callIds.length === 0) return new Map();
  const [condition, value] =
    'callIds' in which
      ? ['u.call_id IN (?)', [...which.callIds]]
      : ['u.call_id IN (SELECT id FROM calls WHERE storm_id = ?)', which.stormId];
  const rows = await select<Stored>(
    sequelize,
    `SELECT u.call_id, u.id AS unit_id, u.kind AS unit_kind, u.place, k.kind, k.value_cents,
            k.at_risk_at, k.earliest_at, k.likely_at, k.save_by_at
       FROM cold_units u JOIN compartments k ON k.unit_id = u.id
      WHERE ${condition} ORDER BY u.call_id, u.place_no, k.place_no`,
    [value],
    tx,
  );

  const byCall = new Map<string, UnitRow[]>();
  for (const row of rows) {
    const units = byCall.get(row.call_id) ?? [];
    byCall.set(row.call_id, units);
    let unit = units.at(-1);
    if (unit?.id !== row.unit_id) {
      unit = { id: row.unit_id, kind: row.unit_kind, place: row.place, compartments: [] };
      units.push(unit);
    }
    unit.compartments.push({
      kind: row.kind,
      valueCents: row.value_cents,
      atRiskAt: row.at_risk_at.getTime(),
      earliestAt: row.earliest_at.getTime(),
      likelyAt: row.likely_at?.getTime() ?? null,
      saveByAt: row.save_by_at?.getTime() ?? null,
    });
  }
  return byCall;
}
