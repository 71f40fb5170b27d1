import {
  DEFAULT_WEIGHTS,
  type PlanJob,
  type PlanProblem,
  type PlanTechnician,
  type PlanWeights,
} from '@shared/domain/planner/problem';

/** The cheapest plan of a small problem: its price and, for each shift, the order of its jobs. */
export interface ExactPlan {
  readonly cost: number;
  readonly routes: readonly { technician: string; shift: number; jobs: readonly string[] }[];
}

interface Best {
  readonly cost: number;
  readonly orders: readonly (readonly number[])[];
}

/**
 * Tries every order of every set of jobs on every shift, then shares the sets out among shifts and
 * technicians by dynamic programming over subsets. Exact for about nine jobs; written apart from the
 * planner and from its scorer.
 */
export function exactPlan(problem: PlanProblem): ExactPlan {
  const weights = { ...DEFAULT_WEIGHTS, ...problem.weights };
  const full = (1 << problem.jobs.length) - 1;
  let shared: (Best | undefined)[] = [{ cost: 0, orders: [] }];
  for (const technician of problem.technicians) {
    let own: (Best | undefined)[] = [{ cost: 0, orders: [] }];
    technician.shifts.forEach((_, shift) => {
      own = combined(own, bestOrders(problem, weights, technician, shift), full);
    });
    own = own.map((best, mask) => (keepsStock(problem, technician, mask) ? best : undefined));
    shared = combined(shared, own, full);
  }

  let cost = Infinity;
  let winner: Best | undefined;
  for (let mask = 0; mask <= full; mask++) {
    const best = shared[mask];
    if (!best) continue;
    const left = problem.jobs.filter((_, job) => !(mask & (1 << job)));
    const total = left.reduce((sum, job) => sum + absent(problem, weights, job), best.cost);
    if (total < cost) {
      cost = total;
      winner = best;
    }
  }
  const shifts = problem.technicians.flatMap(({ id, shifts: own }) =>
    own.map((_, shift) => ({ technician: id, shift })),
  );
  return {
    cost,
    routes: shifts.map((shift, index) => ({
      ...shift,
      jobs: (winner?.orders[index] ?? []).map((job) => problem.jobs[job]!.id),
    })),
  };
}

/** For every set of jobs the cheapest way to split it between two. */
function combined(
  one: readonly (Best | undefined)[],
  other: readonly (Best | undefined)[],
  full: number,
): (Best | undefined)[] {
  const result: (Best | undefined)[] = [];
  for (let mask = 0; mask <= full; mask++) {
    for (let part = mask; ; part = (part - 1) & mask) {
      const a = one[mask ^ part];
      const b = other[part];
      if (a && b && a.cost + b.cost < (result[mask]?.cost ?? Infinity)) {
        result[mask] = { cost: a.cost + b.cost, orders: [...a.orders, ...b.orders] };
      }
      if (part === 0) break;
    }
  }
  return result;
}

function bestOrders(
  problem: PlanProblem,
  weights: PlanWeights,
  technician: PlanTechnician,
  shiftIndex: number,
): (Best | undefined)[] {
  const shift = technician.shifts[shiftIndex]!;
  const home = shift.to ?? technician.home;
  const frozen = shiftIndex > 0 ? [] : technician.frozen;
  const opening = frozen.map((id) => problem.jobs.findIndex((job) => job.id === id));
  const best: (Best | undefined)[] = [];
  if (opening.length === 0) best[0] = { cost: 0, orders: [[]] };

  const visit = (
    order: number[],
    mask: number,
    place: number,
    time: number,
    cost: number,
  ): void => {
    if (order.length >= opening.length && order.length > 0) {
      const drive = travel(problem, place, home);
      const over = Math.max(0, time + drive - shift.end);
      if (over <= weights.maxOvertime || order.length === opening.length) {
        const total =
          cost + (drive / 3600) * weights.travelPerHour + (over / 3600) * weights.overtimePerHour;
        if (total < (best[mask]?.cost ?? Infinity))
          best[mask] = { cost: total, orders: [[...order]] };
      }
    }
    problem.jobs.forEach((job, index) => {
      if (mask & (1 << index)) return;
      if (order.length < opening.length && opening[order.length] !== index) return;
      if (order.length >= opening.length && !mayGo(job, technician)) return;
      const drive = travel(problem, place, job.loc);
      const start = startOf(job, time + drive);
      const added =
        (drive / 3600) * weights.travelPerHour +
        visitCost(problem, weights, job, start, technician);
      order.push(index);
      visit(order, mask | (1 << index), job.loc, start + job.service, cost + added);
      order.pop();
    });
  };
  const from = shift.from ?? (shiftIndex === 0 ? technician.at : technician.home);
  visit([], 0, from, Math.max(shift.start, technician.availableAt, problem.now), 0);
  return best;
}

function mayGo(job: PlanJob, technician: PlanTechnician): boolean {
  return (
    job.skills.every((skill) => technician.skills.includes(skill)) &&
    (job.onlyTechnicians?.includes(technician.id) ?? true)
  );
}

/** Accepted stops may overdraw the van; nothing else may. */
function keepsStock(problem: PlanProblem, technician: PlanTechnician, mask: number): boolean {
  const taken = new Map<string, { all: number; free: number }>();
  problem.jobs.forEach((job, index) => {
    if (!(mask & (1 << index)) || job.part === undefined) return;
    const count = taken.get(job.part) ?? { all: 0, free: 0 };
    count.all++;
    if (!technician.frozen.includes(job.id)) count.free++;
    taken.set(job.part, count);
  });
  return [...taken].every(
    ([part, { all, free }]) => free === 0 || all <= (technician.parts[part] ?? 0),
  );
}

function startOf(job: PlanJob, arrival: number): number {
  const ready = Math.max(arrival, job.earliest ?? -Infinity);
  for (const [from, to] of [...(job.windows ?? [])].sort((a, b) => a[0] - b[0])) {
    if (to >= ready) return Math.max(from, ready);
  }
  return ready;
}

function visitCost(
  problem: PlanProblem,
  weights: PlanWeights,
  job: PlanJob,
  start: number,
  technician: PlanTechnician,
): number {
  let cost = ((start - job.calledAt) / 3600) * weights.waitPerHour * job.weight;
  for (const deadline of job.deadlines ?? []) cost += start > deadline.at ? deadline.value : 0;
  const lastEnd = Math.max(...(job.windows ?? []).map((window) => window[1]));
  if (job.windows?.length && start > lastEnd) {
    cost += weights.lateFixed + ((start - lastEnd) / 3600) * weights.latePerHour;
  }
  for (const route of problem.previous?.routes ?? []) {
    const isPromised = route.stops.some(
      (stop) => stop.job === job.id && stop.start < problem.now + weights.churnHorizon,
    );
    if (isPromised && route.technician !== technician.id) cost += weights.churnReassign;
  }
  return cost;
}

function absent(problem: PlanProblem, weights: PlanWeights, job: PlanJob): number {
  const ends = problem.technicians.flatMap(({ shifts }) => shifts.map(({ end }) => end));
  const hours = (Math.max(problem.now, ...ends) - job.calledAt) / 3600;
  const values = (job.deadlines ?? []).reduce((sum, { value }) => sum + value, 0);
  return values + job.weight * (weights.unservedBase + hours * weights.waitPerHour);
}

function travel(problem: PlanProblem, from: number, to: number): number {
  return (problem.matrix as ArrayLike<number>)[from * problem.locations + to]!;
}
