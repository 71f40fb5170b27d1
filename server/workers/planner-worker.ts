import { moveGains } from '@shared/domain/planner/explain-moves';
import { explainUnplanned } from '@shared/domain/planner/explain-unplanned';
import { carriedOver, plan } from '@shared/domain/planner/plan';
import { stopReasons, summarisePlan } from '@shared/domain/planner/plan-summary';
import type { Plan, PlanProblem } from '@shared/domain/planner/problem';
import { stopDrives } from '@shared/domain/planner/stop-drives';
import type { PlannerRequest, PlannerResponse, RouteSummary } from './planner-client';
import { plannerDrives } from './planner-drives';
import { serveRequests, type Running } from './serve-requests';

/** Rounds that no budget of time reaches. */
const WITHOUT_END = 1e9;

function answer(request: PlannerRequest, { shouldStop }: Running): PlannerResponse {
  const began = performance.now();
  const { points, budgetMs, seed, explainMs } = request;
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
  const explained = performance.now();
  const isOver = (): boolean =>
    shouldStop() || performance.now() - explained > (explainMs ?? Infinity);
  const drives = stopDrives(problem, result);
  return {
    plan: result,
    summary: summarisePlan(problem, result, { distanceKm }),
    before: before && { plan: before, summary: summarisePlan(problem, before, { distanceKm }) },
    reasons: [...stopReasons(problem, result)].map(([job, reason]) => ({ job, ...reason })),
    drives: [...drives].map(([job, seconds]) => ({ job, seconds })),
    byTechnician: byTechnician(problem, result, distanceKm),
    gains: explainMs === 0 ? [] : moveGains(problem, result, isOver),
    unplanned: explainMs === 0 ? [] : explainUnplanned(problem, result, isOver),
    source,
    elapsedMs: performance.now() - began,
  };
}

function byTechnician(
  problem: PlanProblem,
  { routes }: Plan,
  distanceKm: (from: number, to: number) => number,
): RouteSummary[] {
  return problem.technicians.map(({ id }) => ({
    technician: id,
    summary: summarisePlan(
      problem,
      { routes: routes.filter(({ technician }) => technician === id), unassigned: [] },
      { distanceKm },
    ),
  }));
}

serveRequests(answer);
