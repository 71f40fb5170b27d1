import { carriedOver, plan } from '@shared/domain/planner/plan';
import { stopReasons, summarisePlan } from '@shared/domain/planner/plan-summary';
import type { PlanProblem } from '@shared/domain/planner/problem';
import type { PlannerRequest, PlannerResponse } from './planner-client';
import { plannerDrives } from './planner-drives';
import { serveRequests, type Running } from './serve-requests';

/** Rounds that no budget of time reaches. */
const WITHOUT_END = 1e9;

function answer(request: PlannerRequest, { shouldStop }: Running): PlannerResponse {
  const began = performance.now();
  const { points, budgetMs, seed } = request;
  if (budgetMs === undefined && request.iterations === undefined) {
    throw new RangeError('Planning needs a budget of time or of rounds.');
  }
  const { matrix, distanceKm, source } = plannerDrives(request);
  const problem: PlanProblem = { ...request.problem, locations: points.length, matrix };
  const progress =
    budgetMs === undefined ? undefined : () => (performance.now() - began) / budgetMs;
  const result = plan(problem, {
    iterations: request.iterations ?? WITHOUT_END,
    seed,
    shouldStop,
    ...(progress ? { progress } : {}),
  });
  const before = problem.previous ? carriedOver(problem) : null;
  return {
    plan: result,
    summary: summarisePlan(problem, result, { distanceKm }),
    before: before && { plan: before, summary: summarisePlan(problem, before, { distanceKm }) },
    reasons: [...stopReasons(problem, result)].map(([job, reason]) => ({ job, ...reason })),
    source,
    elapsedMs: performance.now() - began,
  };
}

serveRequests(answer);
