import type { CompiledProblem } from './compiled-problem';
import type { PlanBreak } from './problem';
import { serviceStart } from './stop-price';

// Taken once: looking a global up costs more than the sum where code runs in a sandbox.
const { max, min } = Math;
const NEVER = Infinity;

/** When a technician sets off for a stop, breaks taken before. */
export interface Departure {
  at: number;
  /** First break that is neither taken nor fallen away. */
  pending: number;
  /** Seconds by which the technician may be ready later while the same breaks are taken. */
  room: number;
  /** Whether such a delay changes nothing, because a break was waited for. */
  isSwallowed: boolean;
}

/** Less than any two moments that differ. */
const BEFORE = 1e-6;

/**
 * Takes the breaks that are due before a stop, by the rule of `PlanBreak`.
 *
 * @param pending first break that is still to come
 * @param time when the technician is ready to leave
 * @param seconds of driving to the stop
 * @param service seconds of work there
 */
export function departure(
  c: CompiledProblem,
  breaks: readonly PlanBreak[],
  pending: number,
  time: number,
  job: number,
  seconds: number,
  service: number,
  result: Departure,
): void {
  let room = NEVER;
  let isSwallowed = false;
  for (; pending < breaks.length; pending++) {
    const { from, to, seconds: pause } = breaks[pending]!;
    if (time > to) continue;
    if (time < from) {
      const end = serviceStart(c, job, time + seconds) + service;
      if (end <= to) {
        if (!isSwallowed) room = min(room, from - time - BEFORE, to - end);
        break;
      }
      if (!isSwallowed) room = min(room, from - time);
      isSwallowed = true;
      time = from + pause;
    } else {
      if (!isSwallowed) room = min(room, to - time);
      time += pause;
    }
  }
  result.at = time;
  result.pending = pending;
  result.room = max(0, room);
  result.isSwallowed = isSwallowed;
}
