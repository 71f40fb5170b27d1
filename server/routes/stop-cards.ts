import type { Sequelize, Transaction } from 'sequelize';
import type { CallRow } from '@shared/contract/calls';
import type { StopCard } from '@shared/contract/routes';
import type { CallState } from '@shared/domain/call-state';
import { unitRows } from '../calls/unit-rows';
import { json, select } from '../db/sql';
import { isActive, stopDtos } from './stop-rows';

interface StoredCall {
  id: string;
  number: number;
  state: CallState;
  name: string;
  phone: string | null;
  address_text: string;
  unit_no: string;
  lon: number | null;
  lat: number | null;
  address_kind: CallRow['address']['kind'];
  power_out_at: Date;
  skills: unknown;
  parts: unknown;
  causes: unknown;
  danger: number;
}

export interface EndedStop {
  readonly technicianId: string;
  readonly stopId: string;
  readonly reason: string;
}

/**
 * Stops as a technician's phone shows them: those named, and the active ones of the calls named.
 * A stop that is over comes back as `ended`, with what to say about it.
 */
export async function stopCards(
  sequelize: Sequelize,
  which: {
    readonly stopIds?: readonly string[];
    readonly callIds?: readonly string[];
    readonly technicianId?: string;
    /** Whether a stop that is over gets a card too: whoever ended it is shown it once more. */
    readonly alsoEnded?: true;
  },
  tx?: Transaction,
): Promise<{ cards: StopCard[]; ended: EndedStop[] }> {
  const ids = new Set(which.stopIds);
  if (which.callIds && which.callIds.length > 0)
    for (const { id } of await select<{ id: string }>(
      sequelize,
      'SELECT id FROM stops WHERE active_call IN (?)',
      [[...which.callIds]],
      tx,
    ))
      ids.add(id);
  if (which.technicianId)
    for (const { id } of await select<{ id: string }>(
      sequelize,
      "SELECT id FROM stops WHERE technician_id = ? AND state IN ('planned','offered','accepted','travelling','on-site')",
      [which.technicianId],
      tx,
    ))
      ids.add(id);
  if (ids.size === 0) return { cards: [], ended: [] };

  const stops = await stopDtos(sequelize, { ids: [...ids] }, tx);
  const callIds = [...new Set(stops.map((stop) => stop.callId))];
  const calls = new Map(
    (
      await select<StoredCall>(
        sequelize,
        `SELECT id, number, state, name, phone, address_text, unit_no, lon, lat, address_kind,
                power_out_at, skills, parts, causes, danger
           FROM calls WHERE id IN (?)`,
        [callIds],
        tx,
      )
    ).map((call) => [call.id, call]),
  );
  const units = await unitRows(sequelize, { callIds }, tx);
  const remarks = await remarksOf(sequelize, callIds, tx);
  const endings = await endingsOf(sequelize, [...ids], tx);

  const cards: StopCard[] = [];
  const ended: EndedStop[] = [];
  for (const stop of stops) {
    const call = calls.get(stop.callId);
    if (!call) continue;
    if (!isActive(stop.state) && !which.alsoEnded) {
      ended.push({
        technicianId: stop.technicianId,
        stopId: stop.id,
        reason: endings.get(stop.id) ?? 'This stop is over.',
      });
      continue;
    }
    cards.push({
      stop,
      callNumber: call.number,
      callState: call.state,
      name: call.name,
      phone: call.phone,
      address: {
        text: call.address_text,
        unitNo: call.unit_no,
        lonLat: call.lon === null || call.lat === null ? null : [call.lon, call.lat],
        kind: call.address_kind,
      },
      lostAt: call.power_out_at.getTime(),
      units: units.get(call.id) ?? [],
      skills: json(call.skills),
      parts: json(call.parts),
      causes: json(call.causes),
      remarks: remarks.get(call.id) ?? [],
      danger: Boolean(call.danger),
    });
  }
  return { cards, ended };
}

async function remarksOf(
  sequelize: Sequelize,
  callIds: readonly string[],
  tx?: Transaction,
): Promise<Map<string, string[]>> {
  const rows = await select<{ call_id: string; text: string }>(
    sequelize,
    'SELECT call_id, text FROM remarks WHERE call_id IN (?) ORDER BY at, id',
    [[...callIds]],
    tx,
  );
  const byCall = new Map<string, string[]>();
  for (const { call_id, text } of rows) byCall.set(call_id, [...(byCall.get(call_id) ?? []), text]);
  return byCall;
}

async function endingsOf(
  sequelize: Sequelize,
  stopIds: readonly string[],
  tx?: Transaction,
): Promise<Map<string, string>> {
  const rows = await select<{ id: string; ended_because: string }>(
    sequelize,
    'SELECT id, ended_because FROM stops WHERE id IN (?) AND ended_because IS NOT NULL',
    [[...stopIds]],
    tx,
  );
  return new Map(rows.map((row) => [row.id, row.ended_because]));
}
