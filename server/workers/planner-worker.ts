import { moveGains } from '@shared/domain/planner/explain-moves';
import { explainUnplanned } from '@shared/domain/planner/explain-unplanned';
import { carriedOver, plan } from '@shared/domain/planner/plan';
import { stopReasons, summarisePlan } from '@shared/domain/planner/plan-summary';
import type { Plan, PlanProblem } from '@shared/domain/planner/problem';
import { stopDrives } from '@shared/domain/planner/stop-drives';
import { warmUp } from '../plan-program/warm-up';
import type { PlannerRequest, PlannerResponse, RouteSummary } from './planner-client';
import { plannerDrives } from './planner-drives';
import { serveRequests, type Running } from './serve-requests';

/** Rounds that no budget of time reaches. */
const WITHOUT_END = 1e9;
/** Milliseconds of rest after which the worker warms up: the server has started by then. */
const WARM_UP_AFTER_MS = 3000;

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
    shouldStop: () => shouldStop() || (progress?.() ?? 0) >= 1,
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

// Whoever asks sooner is answered at once, and the worker is warm by that.
const warming = setTimeout(warmUp, WARM_UP_AFTER_MS).unref();
serveRequests<PlannerRequest, PlannerResponse>((request, running) => {
  clearTimeout(warming);
  return answer(request, running);
});
