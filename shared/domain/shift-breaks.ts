import { MINUTE_MS, type Instant } from './instant';

/** A pause of so many minutes that begins between two moments of a shift. */
export interface ShiftBreak {
  readonly from: Instant;
  readonly to: Instant;
  readonly minutes: number;
}

/** A time of work, from setting off to the end of the visit. */
export interface TimeAtWork {
  readonly from: Instant;
  readonly to: Instant;
}

const lasts = ({ minutes }: ShiftBreak): number => minutes * MINUTE_MS;

/** What is wrong with the breaks of a shift, in words; `null` when nothing is. */
export function breaksFault(
  shift: { readonly startsAt: Instant; readonly endsAt: Instant },
  breaks: readonly ShiftBreak[],
): string | null {
  const sorted = inOrder(breaks);
  for (const [i, one] of sorted.entries()) {
    if (one.to < one.from) return 'A break begins at the latest before it begins at the earliest.';
    if (one.from < shift.startsAt || one.to + lasts(one) > shift.endsAt)
      return 'A break does not lie within its shift.';
    const before = sorted[i - 1];
    if (before && one.from < before.to + lasts(before)) return 'Two breaks of a shift overlap.';
  }
  return null;
}

/**
 * The breaks that are still due. Nobody reports a pause, so one counts as taken once the technician
 * was at no work for as long, at or after its beginning: our reading, which forgets no pause that was
 * possible and plans none twice.
 *
 * @param work in any order
 */
export function breaksDue(
  breaks: readonly ShiftBreak[],
  shiftStart: Instant,
  work: readonly TimeAtWork[],
  now: Instant,
): ShiftBreak[] {
  const busy = [...work].sort((a, b) => a.from - b.from);
  return inOrder(breaks).filter((one) => {
    if (now <= one.from) return true;
    let free = Math.max(shiftStart, one.from);
    for (const { from, to } of busy) {
      if (Math.min(from, now) - free >= lasts(one)) return false;
      free = Math.max(free, to);
    }
    return now - free < lasts(one);
  });
}

/**
 * When the way to the next visit begins, with the breaks that come before it, by the planner's rule: a
 * break is taken at the first moment at or after its `from`, or earlier, waiting for `from`, when the
 * next visit would end after its `to`; one that could only begin after `to` falls away.
 *
 * @param due in their order; those that are dealt with are taken off it
 * @param visitEnds when the visit would end, if the way to it began then
 */
export function afterBreaks(
  free: Instant,
  due: ShiftBreak[],
  visitEnds: (setsOff: Instant) => Instant,
): Instant {
  let at = free;
  for (let next = due[0]; next; next = due[0]) {
    if (at <= next.to) {
      if (at < next.from && visitEnds(at) <= next.to) return at;
      at = Math.max(at, next.from) + lasts(next);
    }
    due.shift();
  }
  return at;
}

const inOrder = (breaks: readonly ShiftBreak[]): ShiftBreak[] =>
  [...breaks].sort((a, b) => a.from - b.from);
