import type { Sequelize, Transaction } from 'sequelize';
import type { CallState } from '@shared/domain/call-state';
import type { CompartmentKind, CompressorStart, UnitKind } from '@shared/domain/cold-unit';
import type { StateChange } from '@shared/domain/forecast/seen';
import type { PhoneCheckAnswers } from '@shared/domain/phone-check/phone-check';
import type { RouteStopState } from '@shared/domain/route-rules';
import type { Skill } from '@shared/domain/skills';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { json, select } from '../db/sql';
import { groupedBy } from './grouped-by';

/** A call with everything that looking ahead asks of it. */
export interface CallAhead {
  readonly id: string;
  readonly state: CallState;
  readonly receivedAt: number;
  readonly settledAt: number | null;
  readonly restoredAt: number | null;
  readonly areaId: string | null;
  readonly lonLat: LonLat | null;
  readonly skills: readonly Skill[];
  readonly answers: PhoneCheckAnswers;
  /** The first unit, which the phone check is about. */
  readonly unit: { readonly kind: UnitKind; readonly compressorStart: CompressorStart } | null;
  readonly compartments: readonly {
    readonly kind: CompartmentKind;
    readonly valueCents: number;
    readonly saveByAt: number | null;
  }[];
}

export async function callsAhead(
  sequelize: Sequelize,
  stormId: string,
  tx: Transaction,
): Promise<CallAhead[]> {
  const calls = await select<{
    id: string;
    state: CallState;
    received_at: Date;
    settled_at: Date | null;
    restored_at: Date | null;
    area_id: string | null;
    lon: number | null;
    lat: number | null;
    skills: unknown;
    phone_check: unknown;
  }>(
    sequelize,
    `SELECT id, state, received_at, settled_at, restored_at, area_id, lon, lat, skills, phone_check
       FROM calls WHERE storm_id = ? ORDER BY received_at, number`,
    [stormId],
    tx,
  );
  const parts = await select<{
    call_id: string;
    unit_kind: UnitKind;
    compressor_start: CompressorStart;
    kind: CompartmentKind;
    value_cents: number;
    save_by_at: Date | null;
  }>(
    sequelize,
    `SELECT u.call_id, u.kind AS unit_kind, u.compressor_start, k.kind, k.value_cents, k.save_by_at
       FROM calls c JOIN cold_units u ON u.call_id = c.id JOIN compartments k ON k.unit_id = u.id
      WHERE c.storm_id = ? ORDER BY u.call_id, u.place_no, k.place_no`,
    [stormId],
    tx,
  );
  const byCall = groupedBy(parts, ({ call_id }) => call_id);
  return calls.map((call) => {
    const own = byCall.get(call.id) ?? [];
    const [first] = own;
    return {
      id: call.id,
      state: call.state,
      receivedAt: call.received_at.getTime(),
      settledAt: call.settled_at?.getTime() ?? null,
      restoredAt: call.restored_at?.getTime() ?? null,
      areaId: call.area_id,
      lonLat: call.lon === null || call.lat === null ? null : [call.lon, call.lat],
      skills: json<Skill[]>(call.skills),
      answers: json<{ answers?: PhoneCheckAnswers }>(call.phone_check).answers ?? {},
      unit: first ? { kind: first.unit_kind, compressorStart: first.compressor_start } : null,
      compartments: own.map(({ kind, value_cents, save_by_at }) => ({
        kind,
        valueCents: value_cents,
        saveByAt: save_by_at?.getTime() ?? null,
      })),
    };
  });
}

export async function histories(
  sequelize: Sequelize,
  stormId: string,
  tx: Transaction,
): Promise<Map<string, StateChange[]>> {
  const rows = await select<{
    call_id: string;
    at: Date;
    from_state: CallState | null;
    to_state: CallState;
    user_id: string | null;
  }>(
    sequelize,
    `SELECT h.call_id, h.at, h.from_state, h.to_state, h.user_id
       FROM call_changes h JOIN calls c ON c.id = h.call_id
      WHERE c.storm_id = ? ORDER BY h.call_id, h.n`,
    [stormId],
    tx,
  );
  const byCall = groupedBy(rows, ({ call_id }) => call_id);
  return new Map(
    [...byCall].map(([callId, own]) => [
      callId,
      own.map(({ at, from_state, to_state, user_id }) => ({
        at: at.getTime(),
        from: from_state,
        to: to_state,
        by: user_id,
      })),
    ]),
  );
}

/** A stop in force, or one that is done. */
export interface StopAhead {
  readonly technicianId: string;
  readonly callId: string;
  readonly state: RouteStopState | 'done';
  readonly arriveAt: number;
  readonly driveMinutes: number;
  readonly travelAt: number | null;
  readonly arrivedAt: number | null;
  readonly endedAt: number | null;
}

/** Those in force in the order of their routes, and those that are done. */
export async function stopsAhead(
  sequelize: Sequelize,
  stormId: string,
  tx: Transaction,
): Promise<StopAhead[]> {
  const rows = await select<{
    technician_id: string;
    call_id: string;
    state: StopAhead['state'];
    arrive_at: Date;
    drive_minutes: number;
    travel_at: Date | null;
    arrived_at: Date | null;
    ended_at: Date | null;
  }>(
    sequelize,
    `SELECT technician_id, call_id, state, arrive_at, drive_minutes, travel_at, arrived_at, ended_at
       FROM stops WHERE storm_id = ? AND (state = 'done' OR active_call IS NOT NULL)
      ORDER BY technician_id, position`,
    [stormId],
    tx,
  );
  return rows.map((row) => ({
    technicianId: row.technician_id,
    callId: row.call_id,
    state: row.state,
    arriveAt: row.arrive_at.getTime(),
    driveMinutes: row.drive_minutes,
    travelAt: row.travel_at?.getTime() ?? null,
    arrivedAt: row.arrived_at?.getTime() ?? null,
    endedAt: row.ended_at?.getTime() ?? null,
  }));
}

export async function areasAhead(
  sequelize: Sequelize,
  stormId: string,
  tx: Transaction,
): Promise<{ id: string; outAt: number; backAt: number | null }[]> {
  const rows = await select<{ id: string; out_at: Date; back_at: Date | null }>(
    sequelize,
    'SELECT id, out_at, back_at FROM areas WHERE storm_id = ?',
    [stormId],
    tx,
  );
  return rows.map(({ id, out_at, back_at }) => ({
    id,
    outAt: out_at.getTime(),
    backAt: back_at?.getTime() ?? null,
  }));
}

/** How many dispatchers there are, for while nobody has worked on a call yet. */
export async function dispatcherCount(sequelize: Sequelize, tx: Transaction): Promise<number> {
  const [row] = await select<{ n: number }>(
    sequelize,
    "SELECT COUNT(*) AS n FROM users WHERE role = 'dispatcher' AND disabled = 0",
    [],
    tx,
  );
  return Number(row?.n ?? 0);
}
