import {
  absentPrices,
  compiledDeadlines,
  compiledPermissions,
  compiledPromises,
  compiledService,
  compiledWindows,
  type CompiledDeadlines,
  type CompiledPromises,
  type CompiledWindows,
} from './compile-lists';
import { compiledParts, type CompiledParts } from './compile-parts';
import { MalformedProblem } from './malformed-problem';
import {
  DEFAULT_WEIGHTS,
  type PlanBreak,
  type PlanJob,
  type PlanProblem,
  type PlanWeights,
} from './problem';
import { flatMatrix, turned } from './travel-table';

export { MalformedProblem };

/** One technician's one shift, before anything is planned on it. */
export interface ShiftStart {
  readonly technician: number;
  readonly shift: number;
  readonly startLoc: number;
  readonly startAt: number;
  readonly endLoc: number;
  readonly shiftEnd: number;
  /** Latest arrival home. */
  readonly limit: number;
  /** In the order of their beginning. */
  readonly breaks: readonly PlanBreak[];
  /** Accepted jobs that open the route. */
  readonly frozen: readonly number[];
}

/**
 * The problem as flat arrays indexed by job number, with every price per second, so that the search
 * touches no objects and no strings. Where there is a shop, the stop there is a job too: number
 * `jobCount`, which is on no list of jobs.
 */
export interface CompiledProblem
  extends CompiledDeadlines, CompiledWindows, CompiledPromises, CompiledParts {
  readonly problem: PlanProblem;
  readonly weights: PlanWeights;
  readonly jobCount: number;
  /** Jobs and the stop at the shop: the length of a row of `service` and `mayServe`. */
  readonly rowLength: number;
  readonly hasShop: boolean;
  readonly technicianCount: number;
  readonly locations: number;
  /** Seconds, from × locations + to. */
  readonly travel: Float64Array;
  /** The same table turned round, so that all drives *to* a place lie side by side. */
  readonly travelTo: Float64Array;
  readonly travelPrice: number;
  readonly overtimePrice: number;
  readonly latePrice: number;
  readonly loc: Int32Array;
  /** Seconds of work, technician × rowLength + job. */
  readonly service: Float64Array;
  readonly calledAt: Float64Array;
  readonly earliest: Float64Array;
  readonly waitPrice: Float64Array;
  /** Price of leaving the job out. */
  readonly absentPrice: Float64Array;
  /** 1 where skills and permissions allow, technician × rowLength + job. */
  readonly mayServe: Uint8Array;
  readonly shifts: readonly ShiftStart[];
  readonly isFrozen: Uint8Array;
}

/** The two tables of drives, for a caller who has them from before. */
export type TravelTables = Pick<CompiledProblem, 'travel' | 'travelTo'>;

export function compile(problem: PlanProblem, tables?: TravelTables): CompiledProblem {
  const weights = { ...DEFAULT_WEIGHTS, ...problem.weights };
  const { technicians, locations, shop } = problem;
  const jobCount = problem.jobs.length;
  const jobs = shop ? [...problem.jobs, stopAtShop(shop.loc, shop.seconds)] : problem.jobs;
  const jobNumber = numbered(
    problem.jobs.map((job) => job.id),
    'Job',
  );
  const technicianNumber = numbered(
    technicians.map((technician) => technician.id),
    'Technician',
  );
  const parts = compiledParts(problem, jobs, jobNumber);
  const mayServe = compiledPermissions(technicians, jobs);
  const promises = compiledPromises(problem, weights, jobNumber, technicianNumber, jobs.length);
  const shifts = compiledShifts(problem, weights, jobNumber);
  const isFrozen = new Uint8Array(jobs.length);
  for (const job of shifts.flatMap((shift) => shift.frozen)) {
    if (isFrozen[job]) throw new MalformedProblem(`Job ${jobs[job]!.id} is frozen twice.`);
    isFrozen[job] = 1;
  }
  jobs.forEach((job) => checkPlace(job.loc, locations, `Job ${job.id}`));

  const travel = tables?.travel ?? flatMatrix(problem);
  return {
    problem,
    weights,
    jobCount,
    rowLength: jobs.length,
    hasShop: shop !== undefined,
    technicianCount: technicians.length,
    locations,
    travel,
    travelTo: tables?.travelTo ?? turned(travel, locations),
    travelPrice: weights.travelPerHour / 3600,
    overtimePrice: weights.overtimePerHour / 3600,
    latePrice: weights.latePerHour / 3600,
    loc: Int32Array.from(jobs, (job) => job.loc),
    service: compiledService(technicians, jobs),
    calledAt: Float64Array.from(jobs, (job) => job.calledAt),
    earliest: Float64Array.from(jobs, (job) => job.earliest ?? -Infinity),
    waitPrice: Float64Array.from(jobs, (job) => (job.weight * weights.waitPerHour) / 3600),
    ...compiledDeadlines(jobs),
    ...compiledWindows(jobs),
    ...promises,
    ...parts,
    absentPrice: absentPrices(problem, jobs, weights),
    mayServe,
    shifts,
    isFrozen,
  };
}

/** A stop that costs nothing but its time. */
function stopAtShop(loc: number, service: number): PlanJob {
  return { id: 'the shop', loc, service, calledAt: 0, weight: 0, skills: [] };
}

function numbered(ids: readonly string[], kind: string): ReadonlyMap<string, number> {
  const numbers = new Map(ids.map((id, index) => [id, index]));
  if (numbers.size !== ids.length) {
    const twice = ids.find((id, index) => numbers.get(id) !== index);
    throw new MalformedProblem(`${kind} ${twice} is listed twice.`);
  }
  return numbers;
}

function checkPlace(place: number, locations: number, whose: string): void {
  if (!Number.isInteger(place) || place < 0 || place >= locations) {
    throw new MalformedProblem(`${whose} is at place ${place} of ${locations}.`);
  }
}

function compiledShifts(
  problem: PlanProblem,
  weights: PlanWeights,
  jobNumber: ReadonlyMap<string, number>,
): ShiftStart[] {
  return problem.technicians.flatMap((technician, index) => {
    if (technician.frozen.length > 0 && technician.shifts.length === 0) {
      throw new MalformedProblem(`Technician ${technician.id} has accepted stops but no shift.`);
    }
    return technician.shifts.map((shift, shiftIndex): ShiftStart => {
      const start = {
        technician: index,
        shift: shiftIndex,
        startLoc: shift.from ?? (shiftIndex === 0 ? technician.at : technician.home),
        startAt: Math.max(shift.start, technician.availableAt, problem.now),
        endLoc: shift.to ?? technician.home,
        shiftEnd: shift.end,
        limit: shift.end + weights.maxOvertime,
        breaks: [...(shift.breaks ?? [])].sort((a, b) => a.from - b.from),
        frozen: shiftIndex > 0 ? [] : technician.frozen.map((id) => jobNumber.get(id)!),
      };
      checkPlace(start.startLoc, problem.locations, `Technician ${technician.id}`);
      checkPlace(start.endLoc, problem.locations, `Technician ${technician.id}`);
      return start;
    });
  });
}
