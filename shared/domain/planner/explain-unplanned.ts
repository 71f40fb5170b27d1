import { counted, partsOf } from './job-parts';
import { partProblem, withJob } from './part-problem';
import { plan } from './plan';
import {
  DEFAULT_WEIGHTS,
  type Plan,
  type PlanJob,
  type PlanProblem,
  type PlanTechnician,
  type PlanWeights,
  type UnassignedReason,
} from './problem';
import { checkPlan, type PlanCheck } from './check-plan';
import { secondsOf } from './stop-drives';

/** One thing that would bring a call on a route, tried on the plan. */
export interface Relaxation {
  readonly kind: 'skill' | 'part' | 'overtime' | 'declined';
  /** With whom it was tried: the cheapest of those near. */
  readonly technician: string;
  /** When the visit would begin then. */
  readonly start: number;
  /** The last start that saves what this one saves; `null` when nothing is saved any more. */
  readonly before: number | null;
  readonly skills?: readonly string[];
  readonly parts?: readonly string[];
  readonly overtimeMinutes?: number;
}

/** The cheapest place for a call among all that may be: what it costs, and what it would save. */
export interface CheapestPlace {
  readonly technician: string;
  readonly start: number;
  /** By how much the plan would be dearer than without the call, in money, its own saving counted. */
  readonly dearer: number;
  /** Values of others that would be lost. */
  readonly othersLost: number;
  readonly overtimeMinutes: number;
  readonly driveMinutes: number;
  /** Money for windows missed. */
  readonly lateness: number;
}

export interface WhyUnplanned {
  readonly job: string;
  readonly cheapest: CheapestPlace | null;
  readonly helps: readonly Relaxation[];
}

/** Who is farther away is not asked: our bound, so that a hundred calls are answered at once. */
const NEAREST = 6;
/** Rounds of search for a question of one route. */
const ROUNDS = 60;
const EXTRA_OVERTIME_S = 3600;
/** Stands above all money that a plan counts. */
const AT_ANY_PRICE = 1e6;

/**
 * For each call on no route what stands in its way and what would change it, found by trying: the call
 * is put to the route of each technician near it, with one rule loosened, and counts as planned when that
 * route then takes it and drops nobody.
 *
 * @param shouldStop asked before each call; what is not looked at by then is left out
 */
export function explainUnplanned(
  problem: PlanProblem,
  made: Pick<Plan, 'routes' | 'unassigned'>,
  shouldStop: () => boolean = () => false,
): WhyUnplanned[] {
  const jobs = new Map(problem.jobs.map((job) => [job.id, job]));
  const left = made.unassigned
    .flatMap(({ job, reason }) => {
      const found = jobs.get(job);
      return found && reason !== 'unreachable' ? [{ job: found, reason }] : [];
    })
    .sort((a, b) => stake(b.job) - stake(a.job));
  const answers: WhyUnplanned[] = [];
  for (const { job, reason } of left) {
    if (shouldStop()) break;
    answers.push(explain(problem, made, job, reason));
  }
  return answers;
}

function explain(
  problem: PlanProblem,
  made: Pick<Plan, 'routes'>,
  job: PlanJob,
  reason: UnassignedReason,
): WhyUnplanned {
  const near = nearest(problem, made, job);
  const able = near.filter((one) => mayGo(job, one));
  const tried = (kind: Relaxation['kind'], whom: readonly PlanTechnician[]): Relaxation[] => {
    const found = whom
      .slice(0, NEAREST)
      .flatMap((one) => relaxed(problem, made, job, one, kind) ?? [])
      .sort((a, b) => a.dearer - b.dearer);
    return found[0] ? [found[0].help] : [];
  };
  const helps = [
    ...(reason === 'skill'
      ? tried(
          'skill',
          near.filter((one) => isAllowed(job, one) && !hasSkills(job, one)),
        )
      : []),
    ...(reason === 'part' ? tried('part', able) : []),
    ...(reason === 'capacity' || reason === 'no_shift' ? tried('overtime', able) : []),
    ...tried(
      'declined',
      near.filter((one) => !isAllowed(job, one) && hasSkills(job, one)),
    ),
  ];
  return { job: job.id, cheapest: cheapestPlace(problem, made, job, able), helps };
}

/** What would happen if this rule did not hold for this technician; `null` when it would not help. */
function relaxed(
  problem: PlanProblem,
  made: Pick<Plan, 'routes'>,
  job: PlanJob,
  technician: PlanTechnician,
  kind: Relaxation['kind'],
): { readonly help: Relaxation; readonly dearer: number } | null {
  const part = partProblem(problem, made, [technician.id], [job]);
  const without = plan(withJob(part.problem, job.id, { onlyTechnicians: [] }), PLAIN);
  const loose = loosened(part.problem, job, technician.id, kind);
  const found = plan(loose, { iterations: ROUNDS, seed: 1 });
  const start = startOf(found, job.id);
  if (start === null || found.unassigned.length > 0) return null;
  return {
    dearer: found.cost - without.cost,
    help: {
      kind,
      technician: technician.id,
      start,
      before: lastGoodStart(job, start),
      ...(kind === 'skill' ? { skills: missing(job, technician) } : {}),
      ...(kind === 'part' ? { parts: lackingParts(job, technician) } : {}),
      ...(kind === 'overtime' ? { overtimeMinutes: overtimeOf(loose, found) } : {}),
    },
  };
}

function loosened(
  problem: PlanProblem,
  job: PlanJob,
  technicianId: string,
  kind: Relaxation['kind'],
): PlanProblem {
  const withTechnician = (
    change: (one: PlanTechnician) => Partial<PlanTechnician>,
  ): PlanProblem => ({
    ...problem,
    technicians: problem.technicians.map((one) => ({ ...one, ...change(one) })),
  });
  switch (kind) {
    case 'skill':
      return withTechnician(({ skills }) => ({ skills: [...skills, ...job.skills] }));
    case 'part':
      return withTechnician(({ parts }) => ({
        parts: withMore(parts, counted(partsOf(job))),
      }));
    case 'overtime': {
      const { maxOvertime } = weightsOf(problem);
      return {
        ...problem,
        weights: { ...problem.weights, maxOvertime: maxOvertime + EXTRA_OVERTIME_S },
      };
    }
    case 'declined':
      return withJob(problem, job.id, { onlyTechnicians: [technicianId] });
  }
}

const withMore = (
  parts: PlanTechnician['parts'],
  more: ReadonlyMap<string, number>,
): PlanTechnician['parts'] => ({
  ...parts,
  ...Object.fromEntries([...more].map(([part, count]) => [part, (parts[part] ?? 0) + count])),
});

/** What the van has none of, or, where only others take it, all that the job takes. */
function lackingParts(job: PlanJob, { parts }: PlanTechnician): readonly string[] {
  const left = new Map(Object.entries(parts));
  const lacking = partsOf(job).filter((part) => {
    const onVan = left.get(part) ?? 0;
    left.set(part, onVan - 1);
    return onVan < 1;
  });
  return lacking.length > 0 ? lacking : partsOf(job);
}

/** The cheapest route that can take the call without dropping anybody, whatever it then costs. */
function cheapestPlace(
  problem: PlanProblem,
  made: Pick<Plan, 'routes'>,
  job: PlanJob,
  able: readonly PlanTechnician[],
): CheapestPlace | null {
  let best: CheapestPlace | null = null;
  for (const technician of able.slice(0, NEAREST)) {
    const part = partProblem(problem, made, [technician.id], [job]);
    const without = checkPlan(
      part.problem,
      plan(withJob(part.problem, job.id, { onlyTechnicians: [] }), PLAIN),
    );
    const forced = plan(
      { ...part.problem, weights: { ...part.problem.weights, unservedBase: AT_ANY_PRICE } },
      { iterations: ROUNDS, seed: 1 },
    );
    const start = startOf(forced, job.id);
    if (start === null || forced.unassigned.length > 0) continue;
    const score = checkPlan(part.problem, forced);
    const place = placeOf(job, technician.id, start, score, without, part.problem);
    if (best === null || place.dearer < best.dearer) best = place;
  }
  return best;
}

function placeOf(
  job: PlanJob,
  technician: string,
  start: number,
  score: PlanCheck,
  without: PlanCheck,
  problem: PlanProblem,
): CheapestPlace {
  const weights = weightsOf(problem);
  const ownLost = (job.deadlines ?? []).reduce(
    (sum, { at, value }) => sum + (start > at ? value : 0),
    0,
  );
  const perHour = (money: number, price: number): number => (price > 0 ? (money / price) * 60 : 0);
  return {
    technician,
    start,
    dearer: score.cost - without.cost,
    othersLost: Math.max(0, score.lostValue - ownLost - without.lostValue),
    overtimeMinutes: perHour(score.overtime - without.overtime, weights.overtimePerHour),
    driveMinutes: perHour(score.travel - without.travel, weights.travelPerHour),
    lateness: Math.max(0, score.lateness - without.lateness),
  };
}

const weightsOf = ({ weights }: PlanProblem): PlanWeights => ({ ...DEFAULT_WEIGHTS, ...weights });

const PLAIN = { iterations: 0, seed: 1 } as const;

/** Technicians by how near the call is to where they are or will be. */
function nearest(problem: PlanProblem, made: Pick<Plan, 'routes'>, job: PlanJob): PlanTechnician[] {
  const locOf = new Map(problem.jobs.map(({ id, loc }) => [id, loc]));
  const doors = new Map<string, number[]>();
  for (const { technician, stops } of made.routes)
    doors.set(technician, [
      ...(doors.get(technician) ?? []),
      ...stops.flatMap((stop) => locOf.get(stop.job) ?? []),
    ]);
  return problem.technicians
    .map((technician) => ({
      technician,
      far: Math.min(
        ...[technician.at, ...(doors.get(technician.id) ?? [])].map((from) =>
          secondsOf(problem, from, job.loc),
        ),
      ),
    }))
    .sort((a, b) => a.far - b.far)
    .map(({ technician }) => technician);
}

const isAllowed = ({ onlyTechnicians }: PlanJob, { id }: PlanTechnician): boolean =>
  onlyTechnicians?.includes(id) ?? true;
const missing = (job: PlanJob, { skills }: PlanTechnician): string[] =>
  job.skills.filter((skill) => !skills.includes(skill));
const hasSkills = (job: PlanJob, technician: PlanTechnician): boolean =>
  missing(job, technician).length === 0;
const mayGo = (job: PlanJob, technician: PlanTechnician): boolean =>
  isAllowed(job, technician) && hasSkills(job, technician);
const stake = ({ deadlines }: PlanJob): number =>
  (deadlines ?? []).reduce((sum, { value }) => sum + value, 0);

const startOf = ({ routes }: Pick<Plan, 'routes'>, job: string): number | null =>
  routes.flatMap(({ stops }) => stops).find((stop) => stop.job === job)?.start ?? null;

function lastGoodStart({ deadlines }: PlanJob, start: number): number | null {
  const kept = (deadlines ?? []).filter(({ at, value }) => at >= start && value > 0);
  return kept.length === 0 ? null : Math.min(...kept.map(({ at }) => at));
}

function overtimeOf({ technicians }: PlanProblem, { routes }: Pick<Plan, 'routes'>): number {
  const over = routes.map(({ technician, shift, end }) => {
    const shiftEnd = technicians.find(({ id }) => id === technician)?.shifts[shift]?.end ?? end;
    return Math.max(0, end - shiftEnd);
  });
  return Math.ceil(Math.max(0, ...over) / 60);
}
