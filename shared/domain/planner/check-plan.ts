import { checkRoute, type CheckedRoute } from './check-route';
import { VanStock } from './check-van-stock';
import { DEFAULT_WEIGHTS, UNASSIGNED_REASONS, type Plan, type PlanProblem } from './problem';

/** What a plan breaks, and its price by its parts in the money of the problem. */
export interface PlanCheck {
  /** What the plan breaks; a plan with any of these must not be published. */
  readonly violations: readonly string[];
  readonly travel: number;
  readonly waiting: number;
  /** Values of planned calls whose visit starts too late for them. */
  readonly lostValue: number;
  readonly lateness: number;
  readonly overtime: number;
  readonly churn: number;
  /** Values, waiting and base of the calls on no route. */
  readonly unserved: number;
  readonly cost: number;
}

/**
 * Works a plan out again from nothing but the order of its stops and halts, checks it against every
 * rule, and prices it.
 *
 * Written apart from the planner, from the words of problem.ts alone, and shares no code with it, so
 * that a mistake in one shows as a difference between the two.
 */
export function checkPlan(
  problem: PlanProblem,
  plan: Pick<Plan, 'routes' | 'unassigned'>,
): PlanCheck {
  const technicians = new Map(problem.technicians.map((person) => [person.id, person]));
  const violations: string[] = [];
  const planned = new Set<string>();
  const context = {
    problem,
    weights: { ...DEFAULT_WEIGHTS, ...problem.weights },
    jobs: new Map(problem.jobs.map((job) => [job.id, job])),
    promises: promises(problem),
    planned,
    stock: new VanStock(problem),
    refuse: (words: string) => void violations.push(words),
  };

  const seenShifts = new Set<string>();
  const checked: CheckedRoute[] = [];
  // What the van carries is used up in the order of the shifts, whatever the order of the list.
  for (const route of [...plan.routes].sort((one, other) => one.shift - other.shift)) {
    const person = technicians.get(route.technician);
    const shift = person?.shifts[route.shift];
    if (!person || !shift) {
      violations.push(`No shift ${route.shift} of technician ${route.technician}.`);
      continue;
    }
    const label = JSON.stringify([person.id, route.shift]);
    if (seenShifts.has(label)) violations.push(`Two routes for ${person.id}/${route.shift}.`);
    seenShifts.add(label);
    checked.push(checkRoute(route, person, shift, context));
  }

  checkFrozen(problem, plan, violations);
  const unserved = checkUnserved(problem, plan, planned, violations);
  const sum = (part: keyof CheckedRoute): number =>
    checked.reduce((total, route) => total + route[part], 0);
  const price = {
    travel: sum('travel'),
    waiting: sum('waiting'),
    lostValue: sum('lostValue'),
    lateness: sum('lateness'),
    overtime: sum('overtime'),
    churn: sum('churn'),
    unserved,
  };
  const cost = Object.values(price).reduce((total, part) => total + part, 0);
  return { violations, ...price, cost };
}

function checkFrozen(problem: PlanProblem, plan: Pick<Plan, 'routes'>, violations: string[]): void {
  for (const person of problem.technicians) {
    const route = plan.routes.find((one) => one.technician === person.id && one.shift === 0);
    const opening = (route?.stops ?? []).slice(0, person.frozen.length).map((stop) => stop.job);
    if (person.frozen.some((job, position) => opening[position] !== job)) {
      violations.push(`The accepted stops of ${person.id} have moved.`);
    }
  }
}

/** @returns the price of the calls on no route */
function checkUnserved(
  problem: PlanProblem,
  plan: Pick<Plan, 'unassigned'>,
  planned: ReadonlySet<string>,
  violations: string[],
): number {
  const weights = { ...DEFAULT_WEIGHTS, ...problem.weights };
  const known = new Set(problem.jobs.map(({ id }) => id));
  const listed = new Set<string>();
  for (const { job: id, reason } of plan.unassigned) {
    if (listed.has(id)) violations.push(`Job ${id} is listed twice as unassigned.`);
    listed.add(id);
    if (!known.has(id)) violations.push(`Unknown job ${id} among the unassigned.`);
    if (planned.has(id)) violations.push(`Job ${id} is both planned and unassigned.`);
    if (!UNASSIGNED_REASONS.includes(reason)) violations.push(`"${reason}" is no reason (${id}).`);
  }
  const lastShiftEnd = problem.technicians
    .flatMap((person) => person.shifts)
    .reduce((latest, shift) => Math.max(latest, shift.end), problem.now);
  let unserved = 0;
  for (const job of problem.jobs) {
    if (planned.has(job.id)) continue;
    if (!listed.has(job.id)) violations.push(`Job ${job.id} is neither planned nor listed.`);
    for (const { value } of job.deadlines ?? []) unserved += value;
    unserved += (job.weight * weights.waitPerHour * (lastShiftEnd - job.calledAt)) / 3600;
    unserved += job.weight * weights.unservedBase;
  }
  return unserved;
}

/** Who was promised to come, and when, for what the previous plan has within the churn horizon. */
function promises({
  previous,
  now,
  weights,
}: PlanProblem): ReadonlyMap<string, { readonly technician: string; readonly start: number }> {
  const horizon = weights?.churnHorizon ?? DEFAULT_WEIGHTS.churnHorizon;
  return new Map(
    (previous?.routes ?? []).flatMap(({ technician, stops }) =>
      stops
        .filter(({ start }) => start < now + horizon)
        .map(({ job, start }) => [job, { technician, start }] as const),
    ),
  );
}
