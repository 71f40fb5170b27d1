import type { PlanJob, PlanProblem, PlanTechnician, PlanWeights } from './problem';

/** Lists of lists lie end to end; job j's part runs from offset[j] to offset[j + 1]. */
export interface CompiledDeadlines {
  readonly deadlineOffset: Int32Array;
  readonly deadlineAt: Float64Array;
  readonly deadlineValue: Float64Array;
}

export interface CompiledWindows {
  readonly windowOffset: Int32Array;
  readonly windowFrom: Float64Array;
  readonly windowTo: Float64Array;
  /** End of the job's last window; Infinity for a job without windows. */
  readonly lastWindowEnd: Float64Array;
}

export interface CompiledPromises {
  /** Technician who was promised for soon, or -1. */
  readonly promised: Int32Array;
  /** Start that was promised for soon; NaN when none was, or when moving it costs nothing. */
  readonly promisedStart: Float64Array;
}

export function compiledDeadlines(jobs: readonly PlanJob[]): CompiledDeadlines {
  const lists = jobs.map((job) => [...(job.deadlines ?? [])].sort((a, b) => a.at - b.at));
  return {
    deadlineOffset: offsets(lists),
    deadlineAt: Float64Array.from(lists.flat(), (deadline) => deadline.at),
    deadlineValue: Float64Array.from(lists.flat(), (deadline) => deadline.value),
  };
}

export function compiledWindows(jobs: readonly PlanJob[]): CompiledWindows {
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

/** Price of leaving each job out. */
export function absentPrices(
  { technicians, now }: PlanProblem,
  jobs: readonly PlanJob[],
  weights: PlanWeights,
): Float64Array {
  const shiftEnds = technicians.flatMap(({ shifts }) => shifts.map((shift) => shift.end));
  const horizon = shiftEnds.reduce((latest, end) => Math.max(latest, end), now);
  return Float64Array.from(jobs, (job) => {
    const values = (job.deadlines ?? []).reduce((sum, deadline) => sum + deadline.value, 0);
    const waitingHours = (horizon - job.calledAt) / 3600;
    return values + job.weight * (waitingHours * weights.waitPerHour + weights.unservedBase);
  });
}

export function compiledPromises(
  { previous, now }: PlanProblem,
  weights: PlanWeights,
  jobNumber: ReadonlyMap<string, number>,
  technicianNumber: ReadonlyMap<string, number>,
  size: number,
): CompiledPromises {
  const promised = new Int32Array(size).fill(-1);
  const promisedStart = new Float64Array(size).fill(NaN);
  for (const route of previous?.routes ?? []) {
    for (const stop of route.stops) {
      const job = jobNumber.get(stop.job);
      if (job === undefined || stop.start >= now + weights.churnHorizon) continue;
      // A number past the last for one who is gone: whoever goes, the customer sees a change.
      promised[job] = technicianNumber.get(route.technician) ?? technicianNumber.size;
      promisedStart[job] = weights.churnMoved > 0 ? stop.start : NaN;
    }
  }
  return { promised, promisedStart };
}

/** 1 where skills and permissions allow, technician × jobs + job. */
export function compiledPermissions(
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

/** Seconds of work by technician × jobs + job. */
export function compiledService(
  technicians: readonly PlanTechnician[],
  jobs: readonly PlanJob[],
): Float64Array {
  const service = new Float64Array(technicians.length * jobs.length);
  technicians.forEach(({ id }, t) => {
    jobs.forEach((job, j) => {
      service[t * jobs.length + j] = job.serviceBy?.[id] ?? job.service;
    });
  });
  return service;
}
