import {
  DEFAULT_WEIGHTS,
  type PlanJob,
  type PlanProblem,
  type PlanTechnician,
  type PlanWeights,
} from './problem';

/** A problem that contradicts itself: a fault of the program that asked, not of a person. */
export class MalformedProblem extends Error {}

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
  /** Accepted jobs that open the route. */
  readonly frozen: readonly number[];
}

/**
 * The problem as flat arrays indexed by job number, with every price per second, so that the search
 * touches no objects and no strings. Lists of lists (deadlines, windows) lie end to end; job j's part
 * runs from offset[j] to offset[j + 1].
 */
export interface CompiledProblem {
  readonly problem: PlanProblem;
  readonly weights: PlanWeights;
  readonly jobCount: number;
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
  readonly service: Float64Array;
  readonly calledAt: Float64Array;
  readonly earliest: Float64Array;
  readonly waitPrice: Float64Array;
  readonly deadlineOffset: Int32Array;
  readonly deadlineAt: Float64Array;
  readonly deadlineValue: Float64Array;
  readonly windowOffset: Int32Array;
  readonly windowFrom: Float64Array;
  readonly windowTo: Float64Array;
  /** End of the job's last window; Infinity for a job without windows. */
  readonly lastWindowEnd: Float64Array;
  /** Price of leaving the job out. */
  readonly absentPrice: Float64Array;
  /** Number of the part that the job takes, or -1. */
  readonly part: Int32Array;
  readonly partCount: number;
  /** Parts on the vans, technician × partCount + part. */
  readonly stock: Int32Array;
  /** Technician who was promised for soon, or -1. */
  readonly promised: Int32Array;
  /** 1 where skills and permissions allow, technician × jobCount + job. */
  readonly mayServe: Uint8Array;
  readonly shifts: readonly ShiftStart[];
  readonly isFrozen: Uint8Array;
}

export function compile(problem: PlanProblem): CompiledProblem {
  const weights = { ...DEFAULT_WEIGHTS, ...problem.weights };
  const { jobs, technicians, locations } = problem;
  const jobNumber = numbered(
    jobs.map((job) => job.id),
    'Job',
  );
  const technicianNumber = numbered(
    technicians.map((technician) => technician.id),
    'Technician',
  );
  const shifts = technicians.flatMap((technician, index) =>
    shiftStarts(problem, weights, technician, index, jobNumber),
  );
  const isFrozen = new Uint8Array(jobs.length);
  for (const job of shifts.flatMap((shift) => shift.frozen)) {
    if (isFrozen[job]) throw new MalformedProblem(`Job ${jobs[job]!.id} is frozen twice.`);
    isFrozen[job] = 1;
  }
  jobs.forEach((job) => checkPlace(job.loc, locations, `Job ${job.id}`));

  const parts = numberParts(jobs);
  const travel = flatMatrix(problem);
  return {
    problem,
    weights,
    jobCount: jobs.length,
    technicianCount: technicians.length,
    locations,
    travel,
    travelTo: turned(travel, locations),
    travelPrice: weights.travelPerHour / 3600,
    overtimePrice: weights.overtimePerHour / 3600,
    latePrice: weights.latePerHour / 3600,
    loc: Int32Array.from(jobs, (job) => job.loc),
    service: Float64Array.from(jobs, (job) => job.service),
    calledAt: Float64Array.from(jobs, (job) => job.calledAt),
    earliest: Float64Array.from(jobs, (job) => job.earliest ?? -Infinity),
    waitPrice: Float64Array.from(jobs, (job) => (job.weight * weights.waitPerHour) / 3600),
    ...compiledDeadlines(jobs),
    ...compiledWindows(jobs),
    absentPrice: absentPrices(problem, weights),
    part: Int32Array.from(jobs, (job) => (job.part === undefined ? -1 : parts.get(job.part)!)),
    partCount: parts.size,
    stock: compiledStock(technicians, parts),
    promised: promisedTechnicians(problem, weights, jobNumber, technicianNumber),
    mayServe: compiledPermissions(technicians, jobs),
    shifts,
    isFrozen,
  };
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

function shiftStarts(
  problem: PlanProblem,
  weights: PlanWeights,
  technician: PlanTechnician,
  index: number,
  jobNumber: ReadonlyMap<string, number>,
): ShiftStart[] {
  if (technician.frozen.length > 0 && technician.shifts.length === 0) {
    throw new MalformedProblem(`Technician ${technician.id} has accepted stops but no shift.`);
  }
  return technician.shifts.map((shift, shiftIndex) => {
    const start = {
      technician: index,
      shift: shiftIndex,
      startLoc: shift.from ?? (shiftIndex === 0 ? technician.at : technician.home),
      startAt: Math.max(shift.start, technician.availableAt, problem.now),
      endLoc: shift.to ?? technician.home,
      shiftEnd: shift.end,
      limit: shift.end + weights.maxOvertime,
      frozen: shiftIndex > 0 ? [] : technician.frozen.map((id) => frozenJob(id, jobNumber)),
    };
    checkPlace(start.startLoc, problem.locations, `Technician ${technician.id}`);
    checkPlace(start.endLoc, problem.locations, `Technician ${technician.id}`);
    return start;
  });
}

function frozenJob(id: string, jobNumber: ReadonlyMap<string, number>): number {
  const job = jobNumber.get(id);
  if (job === undefined)
    throw new MalformedProblem(`The accepted job ${id} is not in the problem.`);
  return job;
}

function flatMatrix({ matrix, locations }: PlanProblem): Float64Array {
  const flat = isNested(matrix)
    ? new Float64Array(matrix.flatMap((row) => Array.from(row)))
    : matrix instanceof Float64Array
      ? matrix
      : new Float64Array(matrix);
  if (flat.length !== locations * locations) {
    throw new MalformedProblem(
      `${locations} places need ${locations ** 2} drives, not ${flat.length}.`,
    );
  }
  // A plain loop: a callback for each of a million drives costs more than the check.
  for (let i = 0; i < flat.length; i++) {
    if (!(flat[i]! >= 0 && flat[i]! < Infinity)) {
      throw new MalformedProblem(`Drive ${i} takes ${flat[i]} seconds.`);
    }
  }
  return flat;
}

function isNested(matrix: PlanProblem['matrix']): matrix is readonly ArrayLike<number>[] {
  return typeof matrix[0] === 'object';
}

/** The transpose, by blocks that fit into the cache; a table that is its own transpose is kept. */
function turned(table: Float64Array, size: number): Float64Array {
  if (isSymmetric(table, size)) return table;
  const result = new Float64Array(table.length);
  const block = 32;
  for (let top = 0; top < size; top += block) {
    for (let left = 0; left < size; left += block) {
      const bottom = Math.min(size, top + block);
      const right = Math.min(size, left + block);
      for (let from = top; from < bottom; from++) {
        for (let to = left; to < right; to++) result[to * size + from] = table[from * size + to]!;
      }
    }
  }
  return result;
}

function isSymmetric(table: Float64Array, size: number): boolean {
  for (let from = 0; from < size; from++) {
    for (let to = from + 1; to < size; to++) {
      if (table[from * size + to] !== table[to * size + from]) return false;
    }
  }
  return true;
}

function compiledDeadlines(
  jobs: readonly PlanJob[],
): Pick<CompiledProblem, 'deadlineOffset' | 'deadlineAt' | 'deadlineValue'> {
  const lists = jobs.map((job) => [...(job.deadlines ?? [])].sort((a, b) => a.at - b.at));
  return {
    deadlineOffset: offsets(lists),
    deadlineAt: Float64Array.from(lists.flat(), (deadline) => deadline.at),
    deadlineValue: Float64Array.from(lists.flat(), (deadline) => deadline.value),
  };
}

function compiledWindows(
  jobs: readonly PlanJob[],
): Pick<CompiledProblem, 'windowOffset' | 'windowFrom' | 'windowTo' | 'lastWindowEnd'> {
  const lists = jobs.map((job) => [...(job.windows ?? [])].sort((a, b) => a[0] - b[0]));
  return {
    windowOffset: offsets(lists),
    windowFrom: Float64Array.from(lists.flat(), ([from]) => from),
    windowTo: Float64Array.from(lists.flat(), ([, to]) => to),
    lastWindowEnd: Float64Array.from(lists, (list) =>
      list.length === 0 ? Infinity : Math.max(...list.map(([, to]) => to)),
    ),
  };
}

function offsets(lists: readonly (readonly unknown[])[]): Int32Array {
  const result = new Int32Array(lists.length + 1);
  lists.forEach((list, index) => {
    result[index + 1] = result[index]! + list.length;
  });
  return result;
}

function absentPrices(problem: PlanProblem, weights: PlanWeights): Float64Array {
  const shiftEnds = problem.technicians.flatMap(({ shifts }) => shifts.map((shift) => shift.end));
  const horizon = Math.max(problem.now, ...shiftEnds);
  return Float64Array.from(problem.jobs, (job) => {
    const values = (job.deadlines ?? []).reduce((sum, deadline) => sum + deadline.value, 0);
    const waitingHours = (horizon - job.calledAt) / 3600;
    return values + job.weight * (waitingHours * weights.waitPerHour + weights.unservedBase);
  });
}

function numberParts(jobs: readonly PlanJob[]): ReadonlyMap<string, number> {
  const names = new Set(jobs.flatMap((job) => (job.part === undefined ? [] : [job.part])));
  return new Map([...names].map((name, index) => [name, index]));
}

function compiledStock(
  technicians: readonly PlanTechnician[],
  parts: ReadonlyMap<string, number>,
): Int32Array {
  return Int32Array.from(
    technicians.flatMap((technician) =>
      [...parts.keys()].map((name) => technician.parts[name] ?? 0),
    ),
  );
}

function promisedTechnicians(
  { previous, now }: PlanProblem,
  weights: PlanWeights,
  jobNumber: ReadonlyMap<string, number>,
  technicianNumber: ReadonlyMap<string, number>,
): Int32Array {
  const promised = new Int32Array(jobNumber.size).fill(-1);
  for (const route of previous?.routes ?? []) {
    for (const stop of route.stops) {
      const job = jobNumber.get(stop.job);
      if (job !== undefined && stop.start < now + weights.churnHorizon) {
        // A number past the last for one who is gone: whoever goes, the customer sees a change.
        promised[job] = technicianNumber.get(route.technician) ?? technicianNumber.size;
      }
    }
  }
  return promised;
}

function compiledPermissions(
  technicians: readonly PlanTechnician[],
  jobs: readonly PlanJob[],
): Uint8Array {
  const mayServe = new Uint8Array(technicians.length * jobs.length);
  technicians.forEach((technician, t) => {
    const skills = new Set(technician.skills);
    jobs.forEach((job, j) => {
      const allowed =
        (!job.onlyTechnicians || job.onlyTechnicians.includes(technician.id)) &&
        job.skills.every((skill) => skills.has(skill));
      mayServe[t * jobs.length + j] = allowed ? 1 : 0;
    });
  });
  return mayServe;
}
