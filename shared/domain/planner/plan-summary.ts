import type { Plan, PlanJob, PlanProblem, PreviousPlan } from './problem';

/** Kilometres in a statute mile. Source: NIST Special Publication 811 (2008), appendix B. */
const KM_PER_MILE = 1.609344;
/** A start that moves by less is the same promise: our estimate. */
const SAME_START_SECONDS = 30 * 60;

/** What a plan does, in the words of the comparison that the dispatcher sees before publishing. */
export interface PlanSummary {
  readonly stopCount: number;
  readonly unassignedCount: number;
  /** Values whose deadline has not passed yet, and what becomes of them. */
  readonly valueAtRiskCents: number;
  readonly valueSavedCents: number;
  readonly valueLostCents: number;
  readonly driveMinutes: number;
  /** Null when the drives' lengths are not known. */
  readonly driveMiles: number | null;
  /** Minutes after the agreed windows, summed over the stops. */
  readonly lateMinutes: number;
  readonly lateStopCount: number;
  readonly overtimeMinutes: number;
  /** Hours from call to visit, summed over the planned stops. */
  readonly waitHours: number;
  readonly moved: PlanMoves;
}

/** Differences from the plan before; each list holds job ids. */
export interface PlanMoves {
  readonly toOtherTechnician: readonly string[];
  /** Same technician, a start that moved by more than half an hour. */
  readonly toOtherTime: readonly string[];
  readonly added: readonly string[];
  readonly dropped: readonly string[];
}

export interface SummaryOptions {
  /** Length of a drive between two places of the matrix. */
  readonly distanceKm?: (from: number, to: number) => number;
  /** The plan to compare with; the problem's own when left out. */
  readonly previous?: PreviousPlan;
}

/** @param problem its money is taken as dollars */
export function summarisePlan(
  problem: PlanProblem,
  plan: Pick<Plan, 'routes' | 'unassigned'>,
  options: SummaryOptions = {},
): PlanSummary {
  const jobs = new Map(problem.jobs.map((job) => [job.id, job]));
  const stops = plan.routes.flatMap((route) => route.stops);
  const stillSavable = (job: PlanJob): number => valueOf(job, ({ at }) => at >= problem.now);
  const atRisk = problem.jobs.reduce((sum, job) => sum + stillSavable(job), 0);
  const saved = stops.reduce(
    (sum, stop) =>
      sum + valueOf(jobs.get(stop.job), ({ at }) => at >= problem.now && at >= stop.start),
    0,
  );
  const late = stops.map((stop) => lateSeconds(jobs.get(stop.job), stop.start));
  const drives = plan.routes.flatMap((route) => drivesOf(problem, jobs, route));
  const { distanceKm } = options;
  return {
    stopCount: stops.length,
    unassignedCount: plan.unassigned.length,
    valueAtRiskCents: cents(atRisk),
    valueSavedCents: cents(saved),
    valueLostCents: cents(atRisk) - cents(saved),
    driveMinutes: sum(drives.map(([from, to]) => seconds(problem, from, to))) / 60,
    driveMiles: distanceKm
      ? sum(drives.map(([from, to]) => distanceKm(from, to))) / KM_PER_MILE
      : null,
    lateMinutes: sum(late) / 60,
    lateStopCount: late.filter((one) => one > 0).length,
    overtimeMinutes: sum(plan.routes.map((route) => overtimeSeconds(problem, route))) / 60,
    waitHours: sum(stops.map((stop) => stop.start - (jobs.get(stop.job)?.calledAt ?? 0))) / 3600,
    moved: movesBetween(options.previous ?? problem.previous, plan),
  };
}

export function movesBetween(
  previous: PreviousPlan | undefined,
  plan: Pick<Plan, 'routes'>,
): PlanMoves {
  const before = places(previous?.routes ?? []);
  const after = places(plan.routes);
  const kept = [...after].flatMap(([job, now]) => {
    const was = before.get(job);
    return was ? [{ job, now, was }] : [];
  });
  return {
    toOtherTechnician: kept
      .filter(({ now, was }) => now.technician !== was.technician)
      .map(({ job }) => job),
    toOtherTime: kept
      .filter(
        ({ now, was }) =>
          now.technician === was.technician && Math.abs(now.start - was.start) > SAME_START_SECONDS,
      )
      .map(({ job }) => job),
    added: [...after.keys()].filter((job) => !before.has(job)),
    dropped: [...before.keys()].filter((job) => !after.has(job)),
  };
}

/** Why a stop stands where it stands. */
export interface StopReason {
  readonly code: 'accepted' | 'window' | 'save-by' | 'past-save-by' | 'on-the-way' | 'longest-wait';
  /** For the technician's phone; durations only, since the rules know no time zone. */
  readonly words: string;
}

/** One reason for each stop of a plan, by job id: the first that holds of promise, value and way. */
export function stopReasons(
  problem: PlanProblem,
  plan: Pick<Plan, 'routes'>,
): ReadonlyMap<string, StopReason> {
  const jobs = new Map(problem.jobs.map((job) => [job.id, job]));
  const reasons = new Map<string, StopReason>();
  for (const route of plan.routes) {
    const technician = problem.technicians.find(({ id }) => id === route.technician);
    const frozen = new Set(route.shift === 0 ? technician?.frozen : []);
    const places = placesOf(problem, jobs, route);
    route.stops.forEach((stop, index) => {
      const job = jobs.get(stop.job);
      if (!job) return;
      const driveSeconds = sum(
        places
          .slice(1)
          .flatMap(({ before, place }, from) =>
            before === index ? [seconds(problem, places[from]!.place, place)] : [],
          ),
      );
      reasons.set(stop.job, stopReason(job, stop.start, driveSeconds, frozen.has(stop.job)));
    });
  }
  return reasons;
}

/** A drive so short that the way itself is the reason: our estimate. */
const SHORT_DRIVE_SECONDS = 8 * 60;

function stopReason(
  job: PlanJob,
  start: number,
  driveSeconds: number,
  isAccepted: boolean,
): StopReason {
  if (isAccepted) return { code: 'accepted', words: 'Accepted: it keeps its place.' };
  if (job.windows?.length) {
    const late = lateSeconds(job, start);
    return {
      code: 'window',
      words: late > 0 ? `Agreed window, ${spoken(late)} late.` : 'Within the agreed window.',
    };
  }
  const savable = (job.deadlines ?? []).filter(({ at, value }) => at >= start && value > 0);
  if (savable.length > 0) {
    const spare = Math.min(...savable.map(({ at }) => at)) - start;
    const value = Math.round(sum(savable.map((deadline) => deadline.value)));
    return { code: 'save-by', words: `Saves $${value}; ${spoken(spare)} before save-by.` };
  }
  if (driveSeconds <= SHORT_DRIVE_SECONDS) {
    return { code: 'on-the-way', words: `On the way: a drive of ${spoken(driveSeconds)}.` };
  }
  return job.deadlines?.length
    ? { code: 'past-save-by', words: 'Past save-by: nothing left to save, the repair still waits.' }
    : { code: 'longest-wait', words: `Has waited ${spoken(start - job.calledAt)}.` };
}

function spoken(duration: number): string {
  const minutes = Math.max(0, Math.round(duration / 60));
  if (minutes < 60) return `${minutes} min`;
  const rest = minutes % 60;
  return rest === 0 ? `${Math.floor(minutes / 60)} h` : `${Math.floor(minutes / 60)} h ${rest} min`;
}

function valueOf(
  job: PlanJob | undefined,
  counts: (deadline: { readonly at: number }) => boolean,
): number {
  return sum((job?.deadlines ?? []).filter(counts).map(({ value }) => value));
}

function lateSeconds(job: PlanJob | undefined, start: number): number {
  const ends = (job?.windows ?? []).map(([, to]) => to);
  return ends.length === 0 ? 0 : Math.max(0, start - Math.max(...ends));
}

function overtimeSeconds(problem: PlanProblem, route: Plan['routes'][number]): number {
  const technician = problem.technicians.find(({ id }) => id === route.technician);
  const shift = technician?.shifts[route.shift];
  return shift ? Math.max(0, route.end - shift.end) : 0;
}

/** The drives of a route as pairs of places, the way home last. */
function drivesOf(
  problem: PlanProblem,
  jobs: ReadonlyMap<string, PlanJob>,
  route: Plan['routes'][number],
): readonly (readonly [from: number, to: number])[] {
  const places = placesOf(problem, jobs, route).map(({ place }) => place);
  return places.slice(1).map((to, index) => [places[index]!, to]);
}

interface PlaceOnRoute {
  readonly place: number;
  /** Number of the stop that the drive to this place leads to; the way home has the next number. */
  readonly before: number;
}

/** Where a route leads: its beginning, the doors with the shop between them, its end. */
function placesOf(
  problem: PlanProblem,
  jobs: ReadonlyMap<string, PlanJob>,
  route: Plan['routes'][number],
): readonly PlaceOnRoute[] {
  const technician = problem.technicians.find(({ id }) => id === route.technician);
  const shift = technician?.shifts[route.shift];
  if (!technician || !shift || route.stops.length === 0) return [];
  const first = shift.from ?? (route.shift === 0 ? technician.at : technician.home);
  const { shop } = problem;
  const fetches = (route.halts ?? []).filter(({ kind }) => kind === 'shop');
  return [
    { place: first, before: -1 },
    ...route.stops.flatMap((stop, before): PlaceOnRoute[] => [
      ...fetches.flatMap((halt) =>
        shop && halt.before === before ? [{ place: shop.loc, before }] : [],
      ),
      { place: jobs.get(stop.job)?.loc ?? first, before },
    ]),
    { place: shift.to ?? technician.home, before: route.stops.length },
  ];
}

function seconds({ matrix, locations }: PlanProblem, from: number, to: number): number {
  const row = matrix[from];
  return typeof row === 'object' ? row[to]! : (matrix as ArrayLike<number>)[from * locations + to]!;
}

function places(
  routes: PreviousPlan['routes'],
): ReadonlyMap<string, { readonly technician: string; readonly start: number }> {
  return new Map(
    routes.flatMap(({ technician, stops }) =>
      stops.map(({ job, start }) => [job, { technician, start }] as const),
    ),
  );
}

const sum = (numbers: readonly number[]): number => numbers.reduce((total, one) => total + one, 0);
const cents = (dollars: number): number => Math.round(dollars * 100);
