import { MalformedProblem } from './malformed-problem';
import type { PlanJob, PlanProblem } from './problem';

/** Parts by number, on the vans and at the shop. */
export interface CompiledParts {
  readonly partNames: readonly string[];
  readonly partCount: number;
  /** Number of the part that the job takes, or -1. */
  readonly part: Int32Array;
  /** Parts on the vans, technician × partCount + part. */
  readonly stock: Int32Array;
  /** What accepted stops leave of them; never below 0. */
  readonly vanFree: Int32Array;
  /** Parts at the shop; Infinity where it has no end of them, all 0 without a shop. */
  readonly shopParts: Float64Array;
}

/** @param jobs the problem's, and one more for the shop where there is one */
export function compiledParts(
  problem: PlanProblem,
  jobs: readonly PlanJob[],
  jobNumber: ReadonlyMap<string, number>,
): CompiledParts {
  const { technicians, shop } = problem;
  const partNames = [...new Set(jobs.flatMap((job) => (job.part === undefined ? [] : [job.part])))];
  const numbers = new Map(partNames.map((name, index) => [name, index]));
  const partCount = partNames.length;
  const part = Int32Array.from(jobs, (job) =>
    job.part === undefined ? -1 : numbers.get(job.part)!,
  );
  const stock = Int32Array.from(
    technicians.flatMap((technician) => partNames.map((name) => technician.parts[name] ?? 0)),
  );
  const vanFree = stock.slice();
  technicians.forEach(({ frozen }, t) => {
    for (const id of frozen) {
      const job = jobNumber.get(id);
      if (job === undefined)
        throw new MalformedProblem(`The accepted job ${id} is not in the problem.`);
      const slot = t * partCount + part[job]!;
      if (part[job]! >= 0) vanFree[slot] = Math.max(0, vanFree[slot]! - 1);
    }
  });
  return {
    partNames,
    partCount,
    part,
    stock,
    vanFree,
    shopParts: Float64Array.from(partNames, (name) =>
      !shop ? 0 : shop.parts ? (shop.parts[name] ?? 0) : Infinity,
    ),
  };
}
