import type { z } from 'zod';
import type { PlanDto, ProposePlan } from '@shared/contract/routes';
import { Refusal } from '@shared/domain/errors';
import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { isDuplicateOf } from '../db/sql';
import type { SignedIn } from '../staff/signed-in';
import { lockOpenStorm } from '../storms/storm-queries';
import type { PlannerResponse } from '../workers/planner-client';
import { WorkerError } from '../workers/worker-client';
import { setAside } from './overtake-plans';
import { planBody } from './plan-body';
import { planFacts, type PlanFacts } from './plan-facts';
import { planProblem } from './plan-problem';
import { toPlanDto } from './plan-rows';
import { PlanRecord } from './stop-record';
import { travelBySettings } from './travel-by-settings';

/**
 * Proposes routes. The search runs on what was read before, without a lock and off the event loop;
 * only the finished proposal is written, and only if the routes are still those it was made from.
 *
 * @throws Refusal `storm-closed`, `plan-overtaken`, or `busy` when the planner does not answer
 */
export async function proposePlan(
  context: Context,
  person: SignedIn,
  told: z.output<typeof ProposePlan> & { readonly stormId: string },
): Promise<PlanDto> {
  const facts = await planFacts(context.sequelize, told.stormId, context.clock());
  if (!facts.isOpen) throw new Refusal('storm-closed', 'The storm is closed.');
  const body = planBody(facts, await askPlanner(context, facts, told.seconds));

  return runCommand(context, orderFrom('proposePlan', person, told), async (job) => {
    const storm = await lockOpenStorm(told.stormId, job.tx);
    job.inStorm(storm.id);
    if (storm.planEpoch !== facts.epoch)
      throw new Refusal(
        'plan-overtaken',
        'The routes were changed while this was being planned. Propose again.',
      );
    await setAside(job, storm.id);
    const plan = PlanRecord.build({
      id: told.planId,
      stormId: storm.id,
      state: 'proposed',
      proposedAt: job.at,
      proposedBy: job.actor.name,
      body: JSON.stringify(body),
      baseEpoch: facts.epoch,
    });
    try {
      await plan.save({ transaction: job.tx });
    } catch (error) {
      if (isDuplicateOf(error, 'PRIMARY'))
        throw new Refusal('already-used', 'A plan with this id exists already. Make a new id.');
      throw error;
    }
    job.touched.plans.add(plan.id);
    job.note(
      'plan',
      plan.id,
      `proposed routes with ${String(body.figures.stops)} stops, ${String(body.unplanned.length)} calls left out`,
    );
    return toPlanDto(plan);
  });
}

async function askPlanner(
  { planner, roads, log }: Context,
  facts: PlanFacts,
  searchSeconds: number,
): Promise<PlannerResponse | null> {
  const { problem, points } = planProblem(facts);
  if (problem.jobs.length === 0 || problem.technicians.length === 0) return null;
  try {
    return await planner.run({
      problem,
      points,
      travel: travelBySettings(facts.settings),
      ...(roads ? { roads: { ...(await roads.matrix(points)), source: roads.source } } : {}),
      // Any number will do; this one makes the same routes of the same storm.
      seed: facts.epoch + 1,
      budgetMs: searchSeconds * 1000,
    });
  } catch (error) {
    // A thread that crashed or is overdue starts again by itself; whoever asked may ask again.
    if (!(error instanceof WorkerError)) throw error;
    log.error({ err: error }, 'the planner gave no plan');
    throw new Refusal('busy', 'The planner gave no answer. Propose again in a moment.');
  }
}
