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
  const distance = new Float64Array(count);
  const { opens, closes, hasWindows } = spans(c);
  for (let job = 0; job < jobCount; job++) {
    const row = loc[job]! * locations;
    const service = c.service[job] ?? 0;
    const soonest = opens[job]! + service;
    const latest = closes[job]! + service;
    const isBound = latest < Infinity;
    const nearest = list.subarray(job * count, (job + 1) * count);
    let known = 0;
    let limit = Infinity;
    for (let other = 0; other < jobCount; other++) {
      const place = row + loc[other]!;
      const there = travel[place]!;
      const back = travelTo[place]!;
      let far = there + back;
      if (hasWindows) {
        far = there < back ? there : back;
        // Without a window on both sides there is nothing to wait for, nor to be late for.
        if (isBound && closes[other]! < Infinity && far < limit) {
          const opened = opens[other]!;
          const closed = closes[other]!;
          const before = there + strain(soonest + there, latest + there, opened, closed);
          const after =
            back +
            strain(opened + service + back, closed + service + back, opens[job]!, closes[job]!);
          far = before < after ? before : after;
        }
      }
      if (far >= limit || other === job || count === 0) continue;
      // In their order from the first: the lower number comes first among equally far ones.
      let at = known < count ? known++ : count - 1;
      for (; at > 0 && distance[at - 1]! > far; at--) {
        distance[at] = distance[at - 1]!;
        nearest[at] = nearest[at - 1]!;
      }
      distance[at] = far;
      nearest[at] = other;
      if (known === count) limit = distance[count - 1]!;
    }
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
