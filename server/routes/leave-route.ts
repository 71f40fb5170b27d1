import type { CallRecord } from '../calls/call-record';
import type { Job } from '../commands/run-command';
import { select } from '../db/sql';
import { TechnicianRecord } from '../technicians/technician-record';
import { StopRecord } from './stop-record';

/**
 * Locks the route that a call stands on, if any: before the call itself, so that all commands lock
 * in one order.
 */
export async function lockRouteOf(job: Job, callId: string): Promise<void> {
  const [stop] = await select<{ technician_id: string }>(
    job.sequelize,
    'SELECT technician_id FROM stops WHERE active_call = ?',
    [callId],
    job.tx,
  );
  if (stop)
    await TechnicianRecord.findByPk(stop.technician_id, {
      transaction: job.tx,
      lock: job.tx.LOCK.UPDATE,
    });
}

/**
 * Takes a call that is settled otherwise off its route. The technician is told why.
 * The call's own state is the caller's to set.
 */
export async function leaveRoute(job: Job, call: CallRecord, because: string): Promise<void> {
  const [active] = await select<{ id: string }>(
    job.sequelize,
    'SELECT id FROM stops WHERE active_call = ?',
    [call.id],
    job.tx,
  );
  if (!active) return;
  const stop = await StopRecord.findByPk(active.id, {
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  if (!stop) return;
  stop.set({
    state: 'pulled',
    endedAt: job.at,
    endedBecause: because.slice(0, 300),
    version: stop.version + 1,
  });
  await stop.save({ transaction: job.tx });
  job.touched.stop(stop.id);
}
