import { partsOf } from '@shared/domain/planner/job-parts';
import type {
  PlanBreak,
  PlanJob,
  PlanProblem,
  PlanTechnician,
  PlanWeights,
} from '@shared/domain/planner/problem';

/** A set of jobs on one shift in their cheapest order. */
export interface Order {
  readonly cost: number;
  readonly jobs: readonly number[];
  readonly shopBefore: number | null;
}

/** Where a technician stands after some stops. */
interface Moment {
  readonly place: number;
  readonly time: number;
  /** Breaks that are still to come. */
  readonly breaks: readonly PlanBreak[];
  readonly cost: number;
  readonly van: ReadonlyMap<string, number>;
  readonly shopBefore: number | null;
  readonly hasFetched: boolean;
}

/**
 * The cheapest order of every set of jobs that one shift can hold, by trying all of them; the stop at the
 * shop is tried at every place.
 *
 * @param van what is on the van when the shift begins, accepted stops' parts taken off
 */
export function bestOrders(
  problem: PlanProblem,
  weights: PlanWeights,
  technician: PlanTechnician,
  shiftIndex: number,
  van: ReadonlyMap<string, number>,
): ReadonlyMap<number, Order> {
  const { jobs, shop } = problem;
  const shift = technician.shifts[shiftIndex]!;
  const home = shift.to ?? technician.home;
  const frozen = shiftIndex > 0 ? [] : technician.frozen;
  const opening = frozen.map((id) => jobs.findIndex((job) => job.id === id));
  const mayGo = jobs.map(
    (job) =>
      job.skills.every((skill) => technician.skills.includes(skill)) &&
      (job.onlyTechnicians?.includes(technician.id) ?? true),
  );
  const best = new Map<number, Order>();
  if (opening.length === 0) best.set(0, { cost: 0, jobs: [], shopBefore: null });
  const drives = (from: number, to: number): number =>
    (problem.matrix as ArrayLike<number>)[from * problem.locations + to]!;

  const finish = (order: readonly number[], mask: number, at: Moment): void => {
    if (at.shopBefore !== null && !at.hasFetched) return;
    const drive = drives(at.place, home);
    const over = Math.max(0, at.time + drive - shift.end);
    if (over > weights.maxOvertime && order.length > opening.length) return;
    const cost =
      at.cost + (drive / 3600) * weights.travelPerHour + (over / 3600) * weights.overtimePerHour;
    if (cost < (best.get(mask)?.cost ?? Infinity)) {
      best.set(mask, { cost, jobs: [...order], shopBefore: at.shopBefore });
    }
  };

  const visit = (order: number[], mask: number, at: Moment): void => {
    const isOpen = order.length >= opening.length;
    if (isOpen && order.length > 0) finish(order, mask, at);
    if (isOpen && at.time > shift.end + weights.maxOvertime) return;
    if (isOpen && shop && at.shopBefore === null) {
      const there = arriveAfterBreaks(at, drives(at.place, shop.loc), (time) => time, shop.seconds);
      visit(order, mask, {
        ...at,
        place: shop.loc,
        time: there.start + shop.seconds,
        breaks: there.breaks,
        cost: at.cost + (drives(at.place, shop.loc) / 3600) * weights.travelPerHour,
        shopBefore: order.length,
      });
    }
    for (let index = 0; index < jobs.length; index++) {
      if (mask & (1 << index)) continue;
      if (isOpen ? !mayGo[index] : opening[order.length] !== index) continue;
      const job = jobs[index]!;
      const taken = isOpen ? takeAll(at, partsOf(job), shop !== undefined) : at;
      if (!taken) continue;
      const drive = drives(at.place, job.loc);
      const service = job.serviceBy?.[technician.id] ?? job.service;
      const there = arriveAfterBreaks(at, drive, (time) => startOf(job, time), service);
      order.push(index);
      visit(order, mask | (1 << index), {
        ...taken,
        place: job.loc,
        time: there.start + service,
        breaks: there.breaks,
        cost:
          at.cost +
          (drive / 3600) * weights.travelPerHour +
          visitCost(problem, weights, job, there.start, technician),
      });
      order.pop();
    }
  };
  visit([], 0, {
    place: shift.from ?? (shiftIndex === 0 ? technician.at : technician.home),
    time: Math.max(shift.start, technician.availableAt, problem.now),
    breaks: [...(shift.breaks ?? [])].sort((a, b) => a.from - b.from),
    cost: 0,
    van,
    shopBefore: null,
    hasFetched: false,
  });
  return best;
}

/** The moment with these parts fewer; null where one of them is nowhere. */
function takeAll(at: Moment, parts: readonly string[], hasShop: boolean): Moment | null {
  let left: Moment | null = at;
  for (const part of parts) left = left && take(left, part, hasShop);
  return left;
}

/** The moment with one part fewer; null where neither van nor shop has it. */
function take(at: Moment, part: string, hasShop: boolean): Moment | null {
  const left = at.van.get(part) ?? 0;
  if (left > 0) return { ...at, van: new Map(at.van).set(part, left - 1) };
  return hasShop && at.shopBefore !== null ? { ...at, hasFetched: true } : null;
}

/** The rule of breaks, told from the technician's side: sit down now, sit down at `from`, or go on. */
function arriveAfterBreaks(
  { time, breaks }: Pick<Moment, 'time' | 'breaks'>,
  drive: number,
  start: (arrival: number) => number,
  service: number,
): { readonly start: number; readonly breaks: readonly PlanBreak[] } {
  const [next, ...later] = breaks;
  if (!next) return { start: start(time + drive), breaks };
  const after = (clock: number): ReturnType<typeof arriveAfterBreaks> =>
    arriveAfterBreaks({ time: clock, breaks: later }, drive, start, service);
  if (time > next.to) return after(time);
  if (time >= next.from) return after(time + next.seconds);
  if (start(time + drive) + service > next.to) return after(next.from + next.seconds);
  return { start: start(time + drive), breaks };
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
  if (job.windows?.length) {
    const lastEnd = Math.max(...job.windows.map((window) => window[1]));
    if (start > lastEnd)
      cost += weights.lateFixed + ((start - lastEnd) / 3600) * weights.latePerHour;
  }
  for (const route of problem.previous?.routes ?? []) {
    for (const stop of route.stops) {
      if (stop.job !== job.id || stop.start >= problem.now + weights.churnHorizon) continue;
      if (route.technician !== technician.id) cost += weights.churnReassign;
      if (Math.abs(start - stop.start) > weights.movedBy) cost += weights.churnMoved;
    }
  }
  return cost;
}
