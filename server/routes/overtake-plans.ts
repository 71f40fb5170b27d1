import type { Job } from '../commands/run-command';
import type { StormRecord } from '../storms/storm-record';
import { PlanRecord } from './stop-record';

/**
 * The routes of the storm have been changed by a person: whatever was proposed before was made from
 * other routes. The storm must be locked. What technicians do does not overtake a proposal;
 * publishing respects it.
 *
 * @param but the plan that is just being published
 */
export async function overtakePlans(job: Job, storm: StormRecord, but?: PlanRecord): Promise<void> {
  storm.planEpoch = (storm.planEpoch ?? 0) + 1;
  await storm.save({ transaction: job.tx });
  await setAside(job, storm.id, but?.id);
}

/** Proposals of before are no longer offered for publishing. */
export async function setAside(job: Job, stormId: string, butId?: string): Promise<void> {
  const plans = await PlanRecord.findAll({
    where: { stormId, state: 'proposed' },
    order: [['id', 'ASC']],
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  for (const plan of plans) {
    if (plan.id === butId) continue;
    plan.set({ state: 'overtaken', version: (plan.version ?? 0) + 1 });
    await plan.save({ transaction: job.tx });
    job.touched.plans.add(plan.id);
  }
}
