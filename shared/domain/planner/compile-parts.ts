import { counted, partsOf } from './job-parts';
import { MalformedProblem } from './malformed-problem';
import type { PlanJob, PlanProblem } from './problem';

/** Parts by number, on the vans and at the shop. */
export interface CompiledParts {
  readonly partNames: readonly string[];
  readonly partCount: number;
  /** Whether a job takes any part, 0 or 1. */
  readonly takesParts: Uint8Array;
  /** What job j takes: places needOffset[j] up to needOffset[j + 1] of the next two. */
  readonly needOffset: Int32Array;
  readonly needPart: Int32Array;
  readonly needCount: Int32Array;
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
  const needs = jobs.map((job) => counted(partsOf(job)));
  const partNames = [...new Set(needs.flatMap((need) => [...need.keys()]))];
  const numbers = new Map(partNames.map((name, index) => [name, index]));
  const partCount = partNames.length;
  const stock = Int32Array.from(
    technicians.flatMap((technician) => partNames.map((name) => technician.parts[name] ?? 0)),
  );
  const vanFree = stock.slice();
  technicians.forEach(({ frozen }, t) => {
    for (const id of frozen) {
      const job = jobNumber.get(id);
      if (job === undefined)
        throw new MalformedProblem(`The accepted job ${id} is not in the problem.`);
      for (const [name, count] of needs[job]!) {
        const slot = t * partCount + numbers.get(name)!;
        vanFree[slot] = Math.max(0, vanFree[slot]! - count);
      }
    }
  });
  return {
    partNames,
    partCount,
    takesParts: Uint8Array.from(needs, ({ size }) => Math.min(1, size)),
    needOffset: offsets(needs.map(({ size }) => size)),
    needPart: Int32Array.from(
      needs.flatMap((need) => [...need.keys()].map((name) => numbers.get(name)!)),
    ),
    needCount: Int32Array.from(needs.flatMap((need) => [...need.values()])),
    stock,
    vanFree,
    shopParts: Float64Array.from(partNames, (name) =>
      !shop ? 0 : shop.parts ? (shop.parts[name] ?? 0) : Infinity,
    ),
  };
}

function offsets(sizes: readonly number[]): Int32Array {
  const starts = new Int32Array(sizes.length + 1);
  sizes.forEach((size, index) => (starts[index + 1] = starts[index]! + size));
  return starts;
}
