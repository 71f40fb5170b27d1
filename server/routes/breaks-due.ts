import type { Sequelize, Transaction } from 'sequelize';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import type { WorkShift } from '@shared/domain/route-rules';
import { breaksDue, type TimeAtWork } from '@shared/domain/shift-breaks';
import { select } from '../db/sql';

/** No shift is longer: earlier visits say nothing of its breaks. */
const LONGEST_SHIFT_MS = 24 * HOUR_MS;

/** Shifts of which those that have begun keep only the breaks that are still due. */
export async function withBreaksDue(
  sequelize: Sequelize,
  shifts: ReadonlyMap<string, readonly WorkShift[]>,
  now: Instant,
  tx: Transaction,
): Promise<Map<string, readonly WorkShift[]>> {
  const onBreaks = [...shifts].filter(([, all]) =>
    all.some(({ breaks }) => breaks?.some((one) => one.from <= now)),
  );
  const work = await timesAtWork(
    sequelize,
    onBreaks.map(([id]) => id),
    now,
    tx,
  );
  return new Map(
    [...shifts].map(([id, all]) => [
      id,
      all.map(({ breaks, ...shift }) => {
        const due = breaksDue(breaks ?? [], shift.startsAt, work.get(id) ?? [], now);
        return due.length > 0 ? { ...shift, breaks: due } : shift;
      }),
    ]),
  );
}

async function timesAtWork(
  sequelize: Sequelize,
  technicianIds: readonly string[],
  now: Instant,
  tx: Transaction,
): Promise<Map<string, TimeAtWork[]>> {
  const byTechnician = new Map<string, TimeAtWork[]>();
  if (technicianIds.length === 0) return byTechnician;
  const rows = await select<{ technician_id: string; travel_at: Date; ended_at: Date | null }>(
    sequelize,
    `SELECT technician_id, travel_at, ended_at FROM stops
      WHERE technician_id IN (?) AND travel_at IS NOT NULL AND travel_at > ?`,
    [[...technicianIds], new Date(now - LONGEST_SHIFT_MS)],
    tx,
  );
  for (const row of rows) {
    const times = byTechnician.get(row.technician_id) ?? [];
    byTechnician.set(row.technician_id, times);
    times.push({ from: row.travel_at.getTime(), to: row.ended_at?.getTime() ?? now });
  }
  return byTechnician;
}
