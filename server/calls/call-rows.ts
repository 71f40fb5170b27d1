import type { Sequelize, Transaction } from 'sequelize';
import type { CallRow } from '@shared/contract/calls';
import type { Instant } from '@shared/domain/instant';
import { json, select } from '../db/sql';
import { unitRows, type UnitRow } from './unit-rows';

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
  cut_off: number;
  household_at_risk: number;
  source: CallRow['source'];
  skills: unknown;
  parts: unknown;
  technician_id: string | null;
  eta_at: Date | null;
  unread: number;
  window_from: Date | null;
  window_to: Date | null;
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
            c.danger, c.cut_off, c.household_at_risk, c.source, c.skills, c.parts, s.technician_id,
            s.eta_at, c.window_from, c.window_to,
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
  const units = await unitRows(sequelize, 'ids' in which ? { callIds: which.ids } : which, tx);
  return calls.map((call) => toRow(call, units.get(call.id) ?? [], now));
}

function toRow(call: StoredCall, units: readonly UnitRow[], now: Instant): CallRow {
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
    units: units.map(({ id, kind, compartments }) => ({ id, kind, compartments })),
    skills: json(call.skills),
    parts: json(call.parts),
    claim:
      call.claim_user_id !== null && claimUntil > now
        ? { userId: call.claim_user_id, name: call.claim_name ?? '', until: claimUntil }
        : null,
    technicianId: call.technician_id,
    etaAt: call.eta_at?.getTime() ?? null,
    danger: Boolean(call.danger),
    householdAtRisk: Boolean(call.household_at_risk),
    cutOff: Boolean(call.cut_off),
    unreadTexts: Number(call.unread),
    ...(call.window_from && call.window_to
      ? { window: { from: call.window_from.getTime(), to: call.window_to.getTime() } }
      : {}),
    source: call.source,
  };
}
