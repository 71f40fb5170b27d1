import type { DrainDto } from '@shared/contract/office';
import {
  drainByArea,
  drainByTechnician,
  drainSeries,
  type DrainCall,
  type DrainGroup,
} from '@shared/domain/backlog-drain';
import type { Instant } from '@shared/domain/instant';
import { isOpen, type CallState } from '@shared/domain/call-state';
import type { Context } from '../context';
import { select } from '../db/sql';
import { asOfOneMoment } from '../db/transaction';
import { findStorm } from '../storms/storm-queries';

interface StoredCall {
  id: string;
  state: CallState;
  received_at: Date;
  settled_at: Date | null;
  restored_at: Date | null;
  area_id: string | null;
  /** Whose visit settled it, or whose route it is on. */
  technician_id: string | null;
  by_visit: number;
}

/** The backlog drain of a storm, as of one moment. @throws Refusal `not-found` */
export function drainOf(
  context: Context,
  stormId: string,
  bucketMinutes: number,
): Promise<DrainDto> {
  return asOfOneMoment(context.sequelize, async (tx) => {
    const storm = await findStorm(stormId, tx);
    const now = storm.closedAt?.getTime() ?? context.clock();
    const calls = await select<StoredCall>(
      context.sequelize,
      `SELECT c.id, c.state, c.received_at, c.settled_at, c.restored_at, c.area_id,
              COALESCE(d.technician_id, a.technician_id) AS technician_id,
              d.id IS NOT NULL AS by_visit
         FROM calls c
         LEFT JOIN stops d ON d.call_id = c.id AND d.state = 'done' AND d.ended_at = c.settled_at
         LEFT JOIN stops a ON a.active_call = c.id
        WHERE c.storm_id = ?`,
      [stormId],
      tx,
    );
    const compartments = await select<{
      call_id: string;
      value_cents: number;
      save_by_at: Date | null;
    }>(
      context.sequelize,
      `SELECT u.call_id, k.value_cents, k.save_by_at
         FROM calls c JOIN cold_units u ON u.call_id = c.id
         JOIN compartments k ON k.unit_id = u.id WHERE c.storm_id = ?`,
      [stormId],
      tx,
    );
    const names = await namesOf(context, stormId, tx);
    const facts = drainCalls(calls, compartments);
    const named = (groups: readonly DrainGroup[], none: string) =>
      groups.map((group) => ({
        ...group,
        name: group.id === null ? none : (names.get(group.id) ?? ''),
      }));
    return {
      at: now,
      bucketMinutes,
      series: [...drainSeries(facts, now, bucketMinutes)],
      byArea: named(drainByArea(facts, now), 'Outside every outage area'),
      byTechnician: named(drainByTechnician(facts, now), 'Nobody yet, or by phone'),
    };
  });
}

function drainCalls(
  calls: readonly StoredCall[],
  compartments: readonly { call_id: string; value_cents: number; save_by_at: Date | null }[],
): DrainCall[] {
  const byCall = new Map<string, { valueCents: number; saveByAt: Instant | null }[]>();
  for (const one of compartments) {
    const list = byCall.get(one.call_id) ?? [];
    byCall.set(one.call_id, list);
    list.push({ valueCents: one.value_cents, saveByAt: one.save_by_at?.getTime() ?? null });
  }
  return calls.map((call) => ({
    arrivedAt: call.received_at.getTime(),
    settledAt: call.settled_at?.getTime() ?? null,
    settledHow: isOpen(call.state) ? null : call.by_visit ? 'visit' : 'phone',
    areaId: call.area_id,
    technicianId: call.technician_id,
    // A duplicate's household counts once, with the call that stays.
    compartments:
      call.state === 'duplicate'
        ? []
        : (byCall.get(call.id) ?? []).map((one) => ({
            ...one,
            restoredAt: call.restored_at?.getTime() ?? null,
          })),
  }));
}

async function namesOf(
  { sequelize }: Context,
  stormId: string,
  tx: Parameters<Parameters<typeof asOfOneMoment>[1]>[0],
): Promise<Map<string, string>> {
  const rows = await select<{ id: string; name: string }>(
    sequelize,
    `SELECT id, name FROM areas WHERE storm_id = ? UNION ALL SELECT id, name FROM technicians`,
    [stormId],
    tx,
  );
  return new Map(rows.map((row) => [row.id, row.name]));
}
