import { Op, type Sequelize, type Transaction } from 'sequelize';
import { Refusal } from '@shared/domain/errors';
import type { Instant } from '@shared/domain/instant';
import type { WorkShift } from '@shared/domain/route-rules';
import type { Job } from '../commands/run-command';
import { ShiftRecord, TechnicianRecord } from './technician-record';
import { toShift } from './technician-rows';

/**
 * Technicians by id, locked until the command ends. Whoever changes a route holds its technician's
 * row first, so a route stands still for as long as a command works on it.
 *
 * @throws Refusal `not-found`
 */
export async function lockTechnicians(
  job: Job,
  ids: readonly string[] | 'all',
): Promise<TechnicianRecord[]> {
  const records = await TechnicianRecord.findAll({
    ...(ids === 'all' ? {} : { where: { id: { [Op.in]: [...new Set(ids)] } } }),
    order: [['id', 'ASC']],
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  if (ids !== 'all' && records.length !== new Set(ids).size)
    throw new Refusal('not-found', 'There is no such technician.');
  return records;
}

/** Shifts that are not over, in their order, by technician. */
export async function shiftsAhead(
  _sequelize: Sequelize,
  now: Instant,
  tx: Transaction,
): Promise<Map<string, WorkShift[]>> {
  const records = await ShiftRecord.findAll({
    where: { endsAt: { [Op.gt]: new Date(now) } },
    order: [['startsAt', 'ASC']],
    transaction: tx,
  });
  const byTechnician = new Map<string, WorkShift[]>();
  for (const record of records) {
    const shifts = byTechnician.get(record.technicianId) ?? [];
    byTechnician.set(record.technicianId, shifts);
    const { breaks, ...shift } = toShift(record);
    shifts.push(breaks ? { ...shift, breaks } : shift);
  }
  return byTechnician;
}
