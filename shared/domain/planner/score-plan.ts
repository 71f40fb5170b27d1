import { DEFAULT_WEIGHTS, type Plan, type PlanJob, type PlanProblem } from './problem';

/** The price of a plan by its parts, in the money of the problem. */
export interface PlanScore {
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

/** Claimed times may differ from the recomputed ones by so much. */
const TOLERATED_SECONDS = 2;

/**
 * Prices a plan from nothing but the order of its stops, and checks it against every rule.
 *
 * Written apart from the planner and shares no code with it, so that a mistake in one shows as a
 * difference between the two.
 */
export function scorePlan(
  problem: PlanProblem,
  plan: Pick<Plan, 'routes' | 'unassigned'>,
): PlanScore {
  const weights = { ...DEFAULT_WEIGHTS, ...problem.weights };
  const jobs = new Map(problem.jobs.map((job) => [job.id, job]));
  const technicians = new Map(problem.technicians.map((person) => [person.id, person]));
  const violations: string[] = [];
  const price = {
    travel: 0,
    waiting: 0,
    lostValue: 0,
    lateness: 0,
    overtime: 0,
    churn: 0,
    unserved: 0,
  };
  const seen = new Set<string>();
  const seenShifts = new Set<string>();
  const partsUsed = new Map<string, number>();
  const promisedTo = promises(problem, weights.churnHorizon);

  for (const route of plan.routes) {
    const person = technicians.get(route.technician);
    const shift = person?.shifts[route.shift];
    if (!person || !shift) {
      violations.push(`No shift ${route.shift} of technician ${route.technician}.`);
      continue;
    }
    const label = `${person.id}/${route.shift}`;
    if (seenShifts.has(label)) violations.push(`Two routes for ${label}.`);
    seenShifts.add(label);
    const frozen = route.shift === 0 ? person.frozen : [];
    let clock = Math.max(problem.now, person.availableAt, shift.start);
    let here = shift.from ?? (route.shift === 0 ? person.at : person.home);
    for (const [position, stop] of route.stops.entries()) {
      const job = jobs.get(stop.job);
      if (!job) {
        violations.push(`Unknown job ${stop.job} on ${label}.`);
        continue;
      }
      if (seen.has(job.id)) violations.push(`Job ${job.id} is planned twice.`);
      seen.add(job.id);
      const isFrozen = position < frozen.length;
      if (!isFrozen) violations.push(...refusals(job, person.id, person.skills));
      if (job.part !== undefined) {
        const key = JSON.stringify([person.id, job.part]);
        const used = (partsUsed.get(key) ?? 0) + 1;
        partsUsed.set(key, used);
        if (!isFrozen && used > (person.parts[job.part] ?? 0)) {
          violations.push(`${person.id} has no ${job.part} left for ${job.id}.`);
        }
      }

      const drive = seconds(problem, here, job.loc);
      const begin = beginning(job, clock + drive);
      if (Math.abs(begin - stop.start) > TOLERATED_SECONDS) {
        violations.push(`${job.id} starts at ${begin}, not at ${stop.start}.`);
      }
      price.travel += (drive * weights.travelPerHour) / 3600;
      price.waiting += (job.weight * weights.waitPerHour * (begin - job.calledAt)) / 3600;
      for (const { at, value } of job.deadlines ?? []) if (begin > at) price.lostValue += value;
      price.lateness += latenessPrice(job, begin, weights);
      const promised = promisedTo.get(job.id);
      if (promised !== undefined && promised !== person.id) price.churn += weights.churnReassign;
      clock = begin + job.service;
      here = job.loc;
    }
    if (route.stops.length === 0) continue;

    const homeward = seconds(problem, here, shift.to ?? person.home);
    price.travel += (homeward * weights.travelPerHour) / 3600;
    clock += homeward;
    if (Math.abs(clock - route.end) > TOLERATED_SECONDS) {
      violations.push(`${label} ends at ${clock}, not at ${route.end}.`);
    }
    const over = Math.max(0, clock - shift.end);
    price.overtime += (over * weights.overtimePerHour) / 3600;
    if (over > weights.maxOvertime && route.stops.length > frozen.length) {
      violations.push(`${label} runs ${over} s into overtime.`);
    }
  }

  for (const person of problem.technicians) {
    const route = plan.routes.find((one) => one.technician === person.id && one.shift === 0);
    const opening = (route?.stops ?? []).slice(0, person.frozen.length).map((stop) => stop.job);
    if (person.frozen.some((job, position) => opening[position] !== job)) {
      violations.push(`The accepted stops of ${person.id} have moved.`);
    }
  }

  const lastShiftEnd = problem.technicians
    .flatMap((person) => person.shifts)
    .reduce((latest, shift) => Math.max(latest, shift.end), problem.now);
  const listed = new Set<string>();
  for (const { job: id } of plan.unassigned) {
    if (listed.has(id)) violations.push(`Job ${id} is listed twice as unassigned.`);
    listed.add(id);
    if (!jobs.has(id)) violations.push(`Unknown job ${id} among the unassigned.`);
    if (seen.has(id)) violations.push(`Job ${id} is both planned and unassigned.`);
  }
  for (const job of problem.jobs) {
    if (seen.has(job.id)) continue;
    if (!listed.has(job.id)) violations.push(`Job ${job.id} is neither planned nor listed.`);
    for (const { value } of job.deadlines ?? []) price.unserved += value;
    price.unserved += (job.weight * weights.waitPerHour * (lastShiftEnd - job.calledAt)) / 3600;
    price.unserved += job.weight * weights.unservedBase;
  }
  const cost = Object.values(price).reduce((sum, part) => sum + part, 0);
  return { violations, ...price, cost };
}

function seconds({ matrix, locations }: PlanProblem, from: number, to: number): number {
  const first = matrix[from];
  return typeof first === 'object'
    ? first[to]!
    : (matrix as ArrayLike<number>)[from * locations + to]!;
}

function refusals(job: PlanJob, technician: string, skills: readonly string[]): string[] {
  const missing = job.skills.filter((skill) => !skills.includes(skill));
  const refused = missing.map((skill) => `${technician} lacks ${skill} for ${job.id}.`);
  if (job.onlyTechnicians && !job.onlyTechnicians.includes(technician)) {
    refused.push(`${technician} may not go to ${job.id}.`);
  }
  return refused;
}

function beginning(job: PlanJob, arrival: number): number {
  const ready = Math.max(arrival, job.earliest ?? arrival);
  const open = [...(job.windows ?? [])]
    .sort((one, other) => one[0] - other[0])
    .find(([, to]) => to >= ready);
  return open ? Math.max(ready, open[0]) : ready;
}

function latenessPrice(
  job: PlanJob,
  begin: number,
  weights: { readonly lateFixed: number; readonly latePerHour: number },
): number {
  const ends = (job.windows ?? []).map(([, to]) => to);
  if (ends.length === 0) return 0;
  const late = begin - Math.max(...ends);
  return late > 0 ? weights.lateFixed + (late * weights.latePerHour) / 3600 : 0;
}

function promises({ previous, now }: PlanProblem, horizon: number): ReadonlyMap<string, string> {
  const promised = new Map<string, string>();
  for (const { technician, stops } of previous?.routes ?? []) {
    for (const { job, start } of stops) {
      if (start < now + horizon) promised.set(job, technician);
    }
  }
  return promised;
}
