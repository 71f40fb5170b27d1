import type { Sequelize, Transaction } from 'sequelize';
import type { PlanDto } from '@shared/contract/routes';
import type { Instant } from '@shared/domain/instant';
import { insert, select } from '../db/sql';
import type { Job } from '../commands/run-command';

/** How often publications have changed each technician's stops since then. */
export async function changesSince(
  sequelize: Sequelize,
  stormId: string,
  since: Instant,
  tx: Transaction,
): Promise<Map<string, number>> {
  const rows = await select<{ technician_id: string; changes: number }>(
    sequelize,
    `SELECT technician_id, SUM(changes) AS changes FROM route_changes
      WHERE storm_id = ? AND at > ? GROUP BY technician_id`,
    [stormId, new Date(since)],
    tx,
  );
  return new Map(rows.map((row) => [row.technician_id, Number(row.changes)]));
}

/** Keeps what a publication changed, for the limit of the hour. */
export async function writeChanges(
  job: Job,
  plan: { readonly id: string; readonly stormId: string; readonly routes: PlanDto['routes'] },
): Promise<void> {
  for (const { technicianId, changes } of plan.routes) {
    if (!changes) continue;
    await insert(
      job.sequelize,
      'INSERT INTO route_changes (storm_id, technician_id, plan_id, at, changes) VALUES (?, ?, ?, ?, ?)',
      [plan.stormId, technicianId, plan.id, job.at, changes],
      job.tx,
    );
  }
}
