import type { Sequelize, Transaction } from 'sequelize';
import type { CallRow, CompartmentRow } from '@shared/contract/calls';
import type { UnitKind } from '@shared/domain/cold-unit';
import type { Instant } from '@shared/domain/instant';
import { json, select } from '../db/sql';

type Which = { readonly ids: readonly string[] } | { readonly stormId: string };

interface StoredCall {
  id: string;
  storm_id: string;
  number: number;
  state: CallRow['state'];
  version: number;
  received_at: Date;
  settled_at: Date | null;
  name: string;
  phone: string | null;
  address_text: string;
  unit_no: string;
  lon: number | null;
  lat: number | null;
  address_kind: CallRow['address']['kind'];
  area_id: string | null;
  power_out_at: Date;
  restored_at: Date | null;
  claim_user_id: string | null;
  claim_until: Date | null;
  claim_name: string | null;
  danger: number;
  source: CallRow['source'];
  skills: unknown;
  parts: unknown;
  technician_id: string | null;
  eta_at: Date | null;
  unread: number;
}

interface StoredCompartment {
  call_id: string;
  unit_id: string;
  unit_kind: UnitKind;
  kind: CompartmentRow['kind'];
  value_cents: number;
  at_risk_at: Date;
  save_by_at: Date | null;
}

/**
 * Calls as boards show them, by number. A claim that has run out is no claim, so the rows depend
 * on the moment.
 */
export async function callRows(
  sequelize: Sequelize,
  which: Which,
  now: Instant,
  tx?: Transaction,
): Promise<CallRow[]> {
  if ('ids' in which && which.ids.length === 0) return [];
  const [condition, value] =
    'ids' in which ? ['c.id IN (?)', [...which.ids]] : ['c.storm_id = ?', which.stormId];

  const calls = await select<StoredCall>(
    sequelize,
    `SELECT c.id, c.storm_id, c.number, c.state, c.version, c.received_at, c.settled_at, c.name,
            c.phone, c.address_text, c.unit_no, c.lon, c.lat, c.address_kind, c.area_id,
            c.power_out_at, c.restored_at, c.claim_user_id, c.claim_until, u.name AS claim_name,
            c.danger, c.source, c.skills, c.parts, s.technician_id, s.eta_at,
            (SELECT COUNT(*) FROM messages m
              WHERE m.call_id = c.id AND m.direction = 'in' AND m.read_at IS NULL) AS unread
       FROM calls c
       LEFT JOIN users u ON u.id = c.claim_user_id
       LEFT JOIN stops s ON s.active_call = c.id
      WHERE ${condition}
      ORDER BY c.number`,
    [value],
    tx,
  );
  const compartments = await select<StoredCompartment>(
    sequelize,
    `SELECT u.call_id, u.id AS unit_id, u.kind AS unit_kind, k.kind, k.value_cents, k.at_risk_at,
            k.save_by_at
       FROM calls c
       JOIN cold_units u ON u.call_id = c.id
       JOIN compartments k ON k.unit_id = u.id
      WHERE ${condition}
      ORDER BY u.call_id, u.place_no, k.place_no`,
    [value],
    tx,
  );

  const units = unitsByCall(compartments);
  return calls.map((call) => toRow(call, units.get(call.id) ?? [], now));
}

function unitsByCall(rows: readonly StoredCompartment[]): Map<string, CallRow['units']> {
  const byCall = new Map<string, CallRow['units']>();
  for (const row of rows) {
    const units = byCall.get(row.call_id) ?? [];
    byCall.set(row.call_id, units);
    let unit = units.at(-1);
    if (unit?.id !== row.unit_id) {
      unit = { id: row.unit_id, kind: row.unit_kind, compartments: [] };
      units.push(unit);
    }
    unit.compartments.push({
      kind: row.kind,
      valueCents: row.value_cents,
      atRiskAt: row.at_risk_at.getTime(),
      saveByAt: row.save_by_at?.getTime() ?? null,
    });
  }
  return byCall;
}

function toRow(call: StoredCall, units: CallRow['units'], now: Instant): CallRow {
  const claimUntil = call.claim_until?.getTime() ?? 0;
  return {
    id: call.id,
    stormId: call.storm_id,
    number: call.number,
    state: call.state,
    version: call.version,
    receivedAt: call.received_at.getTime(),
    settledAt: call.settled_at?.getTime() ?? null,
    name: call.name,
    phone: call.phone,
    address: {
      text: call.address_text,
      unitNo: call.unit_no,
      lonLat: call.lon === null || call.lat === null ? null : [call.lon, call.lat],
      kind: call.address_kind,
    },
    areaId: call.area_id,
    lostAt: call.power_out_at.getTime(),
    restoredAt: call.restored_at?.getTime() ?? null,
    units,
    skills: json(call.skills),
    parts: json(call.parts),
    claim:
      call.claim_user_id !== null && claimUntil > now
        ? { userId: call.claim_user_id, name: call.claim_name ?? '', until: claimUntil }
        : null,
    technicianId: call.technician_id,
    etaAt: call.eta_at?.getTime() ?? null,
    danger: Boolean(call.danger),
    unreadTexts: Number(call.unread),
    source: call.source,
  };
}
