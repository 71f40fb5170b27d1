import { hoursBetween, type Instant } from '../instant';

/** A stretch of time, its end not included. */
export interface Span {
  readonly from: Instant;
  readonly to: Instant;
}

/**
 * Hours on the wall against hours without cooling, both counted from the loss. They differ when the
 * power came back for a while and the unit ran: published limits count hours without power, so the
 * hours before and after are added up.
 */
export interface UncooledTime {
  /** Hours without cooling that had passed at a moment. */
  uncooledBy(wallHours: number): number;
  /** The first moment at which so many hours without cooling have passed. */
  wallAfter(uncooledHours: number): number;
  readonly hasRun: boolean;
}

/** @param ranSpans when the unit ran meanwhile; parts outside the time since the loss do not count */
export function uncooledTime(lostAt: Instant, ranSpans: readonly Span[]): UncooledTime {
  const spans = inOrder(ranSpans, lostAt).map(({ from, to }) => ({
    from: hoursBetween(lostAt, from),
    to: hoursBetween(lostAt, to),
  }));
  return {
    hasRun: spans.length > 0,
    uncooledBy: (wallHours) =>
      spans.reduce(
        (hours, { from, to }) => hours - Math.max(0, Math.min(to, wallHours) - from),
        wallHours,
      ),
    wallAfter: (uncooledHours) => {
      let wallHours = uncooledHours;
      for (const { from, to } of spans) {
        if (wallHours <= from) break;
        wallHours += to - from;
      }
      return wallHours;
    },
  };
}

/** Sorted, cut to the time after the loss, and joined where they overlap. */
export function inOrder(spans: readonly Span[], lostAt: Instant): readonly Span[] {
  const joined: Span[] = [];
  for (const span of [...spans].sort((a, b) => a.from - b.from)) {
    const from = Math.max(span.from, lostAt);
    if (span.to <= from) continue;
    const last = joined.at(-1);
    if (last && from <= last.to) {
      joined[joined.length - 1] = { from: last.from, to: Math.max(last.to, span.to) };
    } else joined.push({ from, to: span.to });
  }
  return joined;
}
