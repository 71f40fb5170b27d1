import type { CompiledProblem } from './compiled-problem';

/** For each job those nearest to it, near to far, itself not among them. */
export interface Neighbours {
  /** Jobs in a list. */
  readonly count: number;
  /** Row-major, job × count. */
  readonly list: Int32Array;
}

/** Share of the time a technician would stand waiting between two jobs that counts as distance. */
const WAIT_SHARE = 0.2;

/**
 * Near is what can well be driven one after the other: the drive in the better of the two directions,
 * with a part of the wait for a window, and what it makes late.
 */
export function nearestJobs(c: CompiledProblem, size: number): Neighbours {
  const { jobCount, locations, travel, travelTo, loc } = c;
  const count = Math.min(size, Math.max(0, jobCount - 1));
  const list = new Int32Array(jobCount * count);
  const distance = new Float64Array(jobCount);
  const order = new Int32Array(jobCount);
  const { opens, closes, hasWindows } = spans(c);
  for (let job = 0; job < jobCount; job++) {
    const row = loc[job]! * locations;
    const service = c.service[job] ?? 0;
    for (let other = 0; other < jobCount; other++) {
      const there = travel[row + loc[other]!]!;
      const back = travelTo[row + loc[other]!]!;
      distance[other] = !hasWindows
        ? there + back
        : Math.min(
            there +
              strain(
                opens[job]! + service + there,
                closes[job]! + service + there,
                opens[other]!,
                closes[other]!,
              ),
            back +
              strain(
                opens[other]! + service + back,
                closes[other]! + service + back,
                opens[job]!,
                closes[job]!,
              ),
          );
      order[other] = other;
    }
    distance[job] = Infinity;
    if (count < jobCount - 1) moveSmallestFirst(order, distance, count);
    const nearest = order.subarray(0, count);
    // The number breaks ties, so that the same problem always gives the same lists.
    nearest.sort((a, b) => distance[a]! - distance[b]! || a - b);
    list.set(nearest, job * count);
  }
  return { count, list };
}

/** What the windows of two jobs add to the drive between them. */
function strain(soonest: number, latest: number, opens: number, closes: number): number {
  const wait = opens - latest;
  const late = soonest - closes;
  return (wait > 0 ? wait * WAIT_SHARE : 0) + (late > 0 ? late : 0);
}

/** Earliest and latest agreed start of each job; infinite where nothing was agreed. */
function spans(c: CompiledProblem): {
  readonly opens: Float64Array;
  readonly closes: Float64Array;
  readonly hasWindows: boolean;
} {
  const opens = new Float64Array(c.jobCount).fill(-Infinity);
  const closes = c.lastWindowEnd.slice(0, c.jobCount);
  let hasWindows = false;
  for (let job = 0; job < c.jobCount; job++) {
    const first = c.windowOffset[job]!;
    if (first === c.windowOffset[job + 1]!) continue;
    opens[job] = c.windowFrom[first]!;
    hasWindows = true;
  }
  return { opens, closes, hasWindows };
}

/** Hoare's selection: afterwards the `size` smallest stand first, in any order. */
function moveSmallestFirst(order: Int32Array, key: Float64Array, size: number): void {
  let left = 0;
  let right = order.length - 1;
  while (left < right) {
    const pivot = key[order[(left + right) >> 1]!]!;
    let i = left;
    let j = right;
    while (i <= j) {
      while (key[order[i]!]! < pivot) i++;
      while (key[order[j]!]! > pivot) j--;
      if (i <= j) {
        const swapped = order[i]!;
        order[i++] = order[j]!;
        order[j--] = swapped;
      }
    }
    if (size - 1 <= j) right = j;
    else if (size - 1 >= i) left = i;
    else return;
  }
}
