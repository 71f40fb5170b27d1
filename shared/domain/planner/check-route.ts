import { needsOf, type VanStock } from './check-van-stock';
import type {
  PlanBreak,
  PlanHalt,
  PlanJob,
  PlanProblem,
  PlanRoute,
  PlanShift,
  PlanStop,
  PlanTechnician,
  PlanWeights,
} from './problem';

/** Claimed times may differ from the recomputed ones by so much. */
const TOLERATED_SECONDS = 2;

export interface CheckContext {
  readonly problem: PlanProblem;
  readonly weights: PlanWeights;
  readonly jobs: ReadonlyMap<string, PlanJob>;
  readonly promises: ReadonlyMap<string, { readonly technician: string; readonly start: number }>;
  /** Filled with what the routes hold. */
  readonly planned: Set<string>;
  readonly stock: VanStock;
  readonly refuse: (words: string) => void;
}

/** What a route costs, by its parts. */
export interface CheckedRoute {
  readonly travel: number;
  readonly waiting: number;
  readonly lostValue: number;
  readonly lateness: number;
  readonly overtime: number;
  readonly churn: number;
}

/** Drives one route from its start, halt by halt and stop by stop. */
export function checkRoute(
  route: PlanRoute,
  person: PlanTechnician,
  shift: PlanShift,
  context: CheckContext,
): CheckedRoute {
  return new RouteCheck(route, person, shift, context).run();
}

class RouteCheck {
  private readonly price = {
    travel: 0,
    waiting: 0,
    lostValue: 0,
    lateness: 0,
    overtime: 0,
    churn: 0,
  };
  private readonly label: string;
  private readonly frozen: readonly string[];
  /** Pauses still to be taken, the earliest first. */
  private readonly due: PlanBreak[];
  /** What the route has halted for so far. */
  private readonly halts: PlanHalt[] = [];
  private clock: number;
  private here: number;
  private hasFetched = false;

  constructor(
    private readonly route: PlanRoute,
    private readonly person: PlanTechnician,
    private readonly shift: PlanShift,
    private readonly context: CheckContext,
  ) {
    this.label = `${person.id}/${route.shift}`;
    this.frozen = route.shift === 0 ? person.frozen : [];
    this.clock = Math.max(context.problem.now, person.availableAt, shift.start);
    this.here = shift.from ?? (route.shift === 0 ? person.at : person.home);
    this.due = [...(shift.breaks ?? [])].sort((one, other) => one.from - other.from);
  }

  run(): CheckedRoute {
    const { route, context } = this;
    if (route.stops.length === 0) {
      if (route.halts?.length) context.refuse(`${this.label} halts without a stop.`);
      return this.price;
    }
    const lacking = context.stock.lacking(route, this.person, context.jobs);
    const shops = (route.halts ?? []).filter(({ kind }) => kind === 'shop');
    route.stops.forEach((stop, position) => {
      for (const halt of shops) if (halt.before === position) this.fetch(halt, lacking);
      this.makeStop(stop, position);
    });
    if (lacking.size > 0 && shops.length === 0 && context.problem.shop) {
      context.refuse(`${this.label} does not fetch ${[...lacking.keys()].join(', ')}.`);
    }
    this.compareHalts();
    this.goHome();
    return this.price;
  }

  /** Takes the pauses that are due before a visit, or before the stop at the shop. */
  private takeBreaks(before: number, endOfVisit: () => number): void {
    for (let pause = this.due[0]; pause; pause = this.due[0]) {
      if (this.clock > pause.to) {
        // It could only begin too late: it falls away.
        this.due.shift();
        continue;
      }
      if (this.clock < pause.from && endOfVisit() <= pause.to) return;
      this.due.shift();
      const start = Math.max(this.clock, pause.from);
      this.clock = start + pause.seconds;
      this.halts.push({ kind: 'break', before, start, finish: this.clock });
    }
  }

  private compareHalts(): void {
    const claimed = this.route.halts ?? [];
    const words = ({ kind, before }: PlanHalt): string => `${kind} before stop ${before}`;
    const due = this.halts.map(words).join(', ');
    if (claimed.map(words).join(', ') !== due) {
      this.context.refuse(`${this.label} has to halt thus: ${due || 'not at all'}.`);
      return;
    }
    claimed.forEach((halt, index) => {
      const found = this.halts[index]!;
      this.compare(`The ${halt.kind} of ${this.label} starts`, found.start, halt.start);
      this.compare(`The ${halt.kind} of ${this.label} ends`, found.finish, halt.finish);
    });
  }

  private fetch(halt: PlanHalt, lacking: ReadonlyMap<string, number>): void {
    const { problem, stock, refuse } = this.context;
    if (!problem.shop) {
      refuse(`${this.label} stops at a shop that is not there.`);
      return;
    }
    if (this.hasFetched) refuse(`${this.label} stops at the shop twice.`);
    if (lacking.size === 0) refuse(`${this.label} stops at the shop for nothing.`);
    if (halt.before < this.frozen.length) refuse(`${this.label} fetches before an accepted stop.`);
    this.hasFetched = true;
    stock.fetch(this.person.id, lacking).forEach(refuse);
    const claimed = halt.parts ?? {};
    for (const part of new Set([...lacking.keys(), ...Object.keys(claimed)])) {
      if ((claimed[part] ?? 0) !== (lacking.get(part) ?? 0)) {
        refuse(
          `${this.label} fetches ${lacking.get(part) ?? 0} × ${part}, not ${claimed[part] ?? 0}.`,
        );
      }
    }
    const { loc, seconds } = problem.shop;
    this.takeBreaks(halt.before, () => this.clock + this.drive(loc) + seconds);
    this.travelTo(loc);
    const start = this.clock;
    this.clock += seconds;
    this.halts.push({ ...halt, start, finish: this.clock });
  }

  private makeStop(stop: PlanStop, position: number): void {
    const { jobs, planned, stock, refuse, weights } = this.context;
    const job = jobs.get(stop.job);
    if (!job) {
      refuse(`Unknown job ${stop.job} on ${this.label}.`);
      return;
    }
    if (planned.has(job.id)) refuse(`Job ${job.id} is planned twice.`);
    planned.add(job.id);
    const isFrozen = position < this.frozen.length;
    if (!isFrozen) this.checkRights(job);
    for (const part of needsOf(job)) {
      const isThere = stock.take(this.person.id, part);
      if (!isThere && !isFrozen) refuse(`${this.person.id} has no ${part} left for ${job.id}.`);
    }

    this.takeBreaks(position, () => {
      return beginning(job, this.clock + this.drive(job.loc)) + this.serviceOf(job);
    });
    this.travelTo(job.loc);
    this.compare(`${job.id} is reached`, this.clock, stop.arrive);
    const begin = beginning(job, this.clock);
    this.compare(`${job.id} starts`, begin, stop.start);
    this.clock = begin + this.serviceOf(job);
    this.compare(`${job.id} ends`, this.clock, stop.finish);

    this.price.waiting += (job.weight * weights.waitPerHour * (begin - job.calledAt)) / 3600;
    for (const { at, value } of job.deadlines ?? []) if (begin > at) this.price.lostValue += value;
    this.price.lateness += latenessPrice(job, begin, weights);
    this.price.churn += this.churnPrice(job, begin);
  }

  private goHome(): void {
    const { weights, refuse } = this.context;
    this.travelTo(this.shift.to ?? this.person.home);
    this.compare(`${this.label} ends`, this.clock, this.route.end);
    const over = Math.max(0, this.clock - this.shift.end);
    this.price.overtime += (over * weights.overtimePerHour) / 3600;
    if (over > weights.maxOvertime && this.route.stops.length > this.frozen.length) {
      refuse(`${this.label} runs ${over} s into overtime.`);
    }
  }

  private checkRights(job: PlanJob): void {
    const { id, skills } = this.person;
    for (const skill of job.skills) {
      if (!skills.includes(skill)) this.context.refuse(`${id} lacks ${skill} for ${job.id}.`);
    }
    if (job.onlyTechnicians && !job.onlyTechnicians.includes(id)) {
      this.context.refuse(`${id} may not go to ${job.id}.`);
    }
  }

  private churnPrice(job: PlanJob, begin: number): number {
    const { promises, weights } = this.context;
    const promised = promises.get(job.id);
    if (!promised) return 0;
    const reassigned = promised.technician === this.person.id ? 0 : weights.churnReassign;
    const moved = Math.abs(begin - promised.start) > weights.movedBy ? weights.churnMoved : 0;
    return reassigned + moved;
  }

  private serviceOf(job: PlanJob): number {
    return job.serviceBy?.[this.person.id] ?? job.service;
  }

  private travelTo(place: number): void {
    const seconds = this.drive(place);
    this.price.travel += (seconds * this.context.weights.travelPerHour) / 3600;
    this.clock += seconds;
    this.here = place;
  }

  private drive(to: number): number {
    const { matrix, locations } = this.context.problem;
    const first = matrix[this.here];
    return typeof first === 'object'
      ? first[to]!
      : (matrix as ArrayLike<number>)[this.here * locations + to]!;
  }

  private compare(what: string, found: number, claimed: number): void {
    if (!(Math.abs(found - claimed) <= TOLERATED_SECONDS)) {
      this.context.refuse(`${what} at ${found}, not at ${claimed}.`);
    }
  }
}

/** When a visit begins after an arrival: not before its earliest time, in the first window still open. */
function beginning(job: PlanJob, arrival: number): number {
  const ready = Math.max(arrival, job.earliest ?? arrival);
  const open = [...(job.windows ?? [])]
    .sort((one, other) => one[0] - other[0])
    .find(([, to]) => to >= ready);
  return open ? Math.max(ready, open[0]) : ready;
}

function latenessPrice(job: PlanJob, begin: number, weights: PlanWeights): number {
  const ends = (job.windows ?? []).map(([, to]) => to);
  if (ends.length === 0) return 0;
  const late = begin - Math.max(...ends);
  return late > 0 ? weights.lateFixed + (late * weights.latePerHour) / 3600 : 0;
}
