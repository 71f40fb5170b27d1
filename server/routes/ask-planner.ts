import { Refusal } from '@shared/domain/errors';
import type { Context } from '../context';
import type { PlannerResponse } from '../workers/planner-client';
import { WorkerError } from '../workers/worker-client';
import type { PlanFacts } from './plan-facts';
import type { Problem } from './plan-problem';
import { travelBySettings } from './travel-by-settings';

/** Saying what changes gain and why calls are left out may take so long: our choice. */
const EXPLAIN_MS = 500;

/**
 * The planner's answer; `null` when there is nothing to plan.
 *
 * @throws Refusal `busy` when the planner does not answer
 */
export async function askPlanner(
  { planner, roads, log }: Context,
  facts: PlanFacts,
  { problem, points }: Problem,
  {
    searchSeconds,
    explains = true,
  }: { readonly searchSeconds: number; readonly explains?: boolean },
): Promise<PlannerResponse | null> {
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
      explainMs: explains ? EXPLAIN_MS : 0,
    });
  } catch (error) {
    // A thread that crashed or is overdue starts again by itself; whoever asked may ask again.
    if (!(error instanceof WorkerError)) throw error;
    log.error({ err: error }, 'the planner gave no plan');
    throw new Refusal('busy', 'The planner gave no answer. Propose again in a moment.');
  }
}
