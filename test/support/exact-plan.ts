import {
  DEFAULT_WEIGHTS,
  type PlanProblem,
  type PlanJob,
  type PlanTechnician,
  type PlanWeights,
} from '@shared/domain/planner/problem';
import { partsOf } from '@shared/domain/planner/job-parts';
import { bestOrders, type Order } from './exact-orders';

/** The cheapest plan of a small problem: its price and, for each shift, the order of its jobs. */
export interface ExactPlan {
  readonly cost: number;
  readonly routes: readonly ExactRoute[];
}

export interface ExactRoute {
  readonly technician: string;
  readonly shift: number;
  readonly jobs: readonly string[];
  /** The job before which the shop is visited, counted from 0; null when it is not. */
  readonly shopBefore: number | null;
}

/** What some technicians do with a set of jobs: for each of their shifts an order. */
export interface Share {
  readonly cost: number;
  readonly orders: readonly Order[];
}

/** Shares by set of jobs (one bit a job). */
export type Shares = ReadonlyMap<number, Share>;

/**
 * Tries every order of every set of jobs on every shift, then shares the sets out among shifts and
 * technicians by dynamic programming over subsets. Exact for about nine jobs; written apart from the
 * planner and from its scorer.
 */
export function exactPlan(problem: PlanProblem): ExactPlan {
  const weights = { ...DEFAULT_WEIGHTS, ...problem.weights };
  // By set of jobs and by what they take from a shop that has an end.
  let shared = new Map<string, { mask: number; taken: readonly number[]; share: Share }>([
    ['0|', { mask: 0, taken: [], share: { cost: 0, orders: [] } }],
  ]);
  const limited = Object.keys(problem.shop?.parts ?? {});
  for (const technician of problem.technicians) {
    const next: typeof shared = new Map();
    const own = [...technicianShares(problem, technician)].map(([mask, share]) => ({
      mask,
      share,
      lack: limited.map((part) => partsTaken(problem, technician, mask, part)),
    }));
    for (const before of shared.values()) {
      for (const { mask, share, lack } of own) {
        if (mask & before.mask) continue;
        const taken = lack.map((count, index) => count + (before.taken[index] ?? 0));
        if (taken.some((count, i) => count > problem.shop!.parts![limited[i]!]!)) continue;
        const key = `${before.mask | mask}|${taken.join()}`;
        const cost = before.share.cost + share.cost;
        if (cost >= (next.get(key)?.share.cost ?? Infinity)) continue;
        next.set(key, {
          mask: before.mask | mask,
          taken,
          share: { cost, orders: [...before.share.orders, ...share.orders] },
        });
      }
    }
    shared = next;
  }

  let cost = Infinity;
  let winner: Share | undefined;
  for (const { mask, share } of shared.values()) {
    const total = share.cost + absentCost(problem, weights, mask);
    if (total < cost) {
      cost = total;
      winner = share;
    }
  }
  const shifts = problem.technicians.flatMap(({ id, shifts: own }) =>
    own.map((_, shift) => ({ technician: id, shift })),
  );
  return {
    cost,
    routes: shifts.map((shift, index) => ({
      ...shift,
      jobs: (winner?.orders[index]?.jobs ?? []).map((job) => problem.jobs[job]!.id),
      shopBefore: winner?.orders[index]?.shopBefore ?? null,
    })),
  };
}

/** The cheapest way for one technician to serve each set of jobs, all shifts together. */
export function technicianShares(problem: PlanProblem, technician: PlanTechnician): Shares {
  const weights = { ...DEFAULT_WEIGHTS, ...problem.weights };
  let shares: Shares = new Map([[0, { cost: 0, orders: [] }]]);
  technician.shifts.forEach((_, shift) => {
    const next = new Map<number, Share>();
    const byVan = new Map<string, ReadonlyMap<number, Order>>();
    for (const [mask, share] of shares) {
      const van = vanAfter(problem, technician, mask);
      const key = JSON.stringify([...van]);
      const orders = byVan.get(key) ?? bestOrders(problem, weights, technician, shift, van);
      byVan.set(key, orders);
      for (const [part, order] of orders) {
        const cost = share.cost + order.cost;
        if (part & mask || cost >= (next.get(mask | part)?.cost ?? Infinity)) continue;
        next.set(mask | part, { cost, orders: [...share.orders, order] });
      }
    }
    shares = next;
  });
  return shares;
}

/** Price of leaving out all jobs that are not in a set. */
export function absentCost(problem: PlanProblem, weights: PlanWeights, mask: number): number {
  const ends = problem.technicians.flatMap(({ shifts }) => shifts.map(({ end }) => end));
  const horizon = Math.max(problem.now, ...ends);
  return problem.jobs.reduce((total, job, index) => {
    if (mask & (1 << index)) return total;
    const values = (job.deadlines ?? []).reduce((sum, { value }) => sum + value, 0);
    const hours = (horizon - job.calledAt) / 3600;
    return total + values + job.weight * (weights.unservedBase + hours * weights.waitPerHour);
  }, 0);
}

/** What is on the van when a set of jobs has been served; accepted ones take theirs first. */
function vanAfter(
  { jobs }: PlanProblem,
  technician: PlanTechnician,
  mask: number,
): ReadonlyMap<string, number> {
  const van = new Map(Object.entries(technician.parts));
  const use = (job: PlanJob): void => {
    for (const part of partsOf(job)) van.set(part, Math.max(0, (van.get(part) ?? 0) - 1));
  };
  for (const id of technician.frozen) use(jobs.find((job) => job.id === id)!);
  jobs.forEach((job, index) => {
    if (mask & (1 << index) && !technician.frozen.includes(job.id)) use(job);
  });
  return van;
}

/** How many of a part the shop gives for a set of jobs. */
export function partsTaken(
  { jobs }: PlanProblem,
  technician: PlanTechnician,
  mask: number,
  part: string,
): number {
  const takes = (accepted: boolean): number =>
    jobs
      .filter(
        (job, index) => mask & (1 << index) && technician.frozen.includes(job.id) === accepted,
      )
      .flatMap(partsOf)
      .filter((one) => one === part).length;
  const van = Math.max(0, (technician.parts[part] ?? 0) - takes(true));
  return Math.max(0, takes(false) - van);
}
