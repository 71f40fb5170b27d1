import type { MoveGain } from '@shared/domain/planner/explain-moves';
import type { WhyUnplanned } from '@shared/domain/planner/explain-unplanned';
import type { PlanSummary, StopReason } from '@shared/domain/planner/plan-summary';
import type { Plan, PlanProblem } from '@shared/domain/planner/problem';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { TravelSettings } from '@shared/domain/travel/travel-times';
import type { RoadMatrix } from './ports';
import { WorkerClient, type WorkerClientOptions } from './worker-client';

/** A planning problem whose places are points. */
export interface PlannerRequest {
  readonly problem: Omit<PlanProblem, 'matrix' | 'locations'>;
  /** Places by the numbers that the problem uses for them. */
  readonly points: readonly LonLat[];
  readonly travel?: Partial<TravelSettings>;
  /** Drives along roads between the points; left out, the worker takes straight lines. */
  readonly roads?: RoadMatrix & { readonly source: string };
  readonly seed: number;
  /** Milliseconds to search for; left out, only `iterations` count and the plan is repeatable. */
  readonly budgetMs?: number;
  /** Most rounds of search; 0 repairs the plan in force and does not search. */
  readonly iterations?: number;
  /** Most milliseconds for saying what changes gain and why calls are left out; 0 leaves it out. */
  readonly explainMs?: number;
}

/** What a plan does on the route of one technician. */
export interface RouteSummary {
  readonly technician: string;
  readonly summary: PlanSummary;
}

export interface PlannerResponse {
  readonly plan: Plan;
  readonly summary: PlanSummary;
  /** The plan in force as it would go from now on; null when there is none. */
  readonly before: { readonly plan: Plan; readonly summary: PlanSummary } | null;
  /** Why each stop stands where it stands. */
  readonly reasons: readonly ({ readonly job: string } & StopReason)[];
  /** Driving to each stop. */
  readonly drives: readonly { readonly job: string; readonly seconds: number }[];
  readonly byTechnician: readonly RouteSummary[];
  /** What changes gain, and what stands in the way of calls on no route; as many as time allowed. */
  readonly gains: readonly MoveGain[];
  readonly unplanned: readonly WhyUnplanned[];
  /** Where the drives come from, in words for the screen. */
  readonly source: string;
  readonly elapsedMs: number;
}

export type PlannerWorker = WorkerClient<PlannerRequest, PlannerResponse>;

export function createPlannerWorker(
  scriptPath: string,
  options: Partial<WorkerClientOptions> = {},
): PlannerWorker {
  return new WorkerClient({
    name: 'planner',
    timeoutMs: 30_000,
    queue: 'in-order',
    ...options,
    scriptPath,
  });
}
