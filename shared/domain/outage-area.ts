import type { Instant } from './instant';

/** When the power of an area went and came back; `null` is still out. */
export interface OutageSpan {
  readonly outAt: Instant;
  readonly backAt: Instant | null;
}

/**
 * Which of the areas around a place counts. The one whose power comes back last wins, for nobody
 * inside has power before that, and one that is still out comes last of all. Of two that come back
 * together the one that went first counts, which is the cautious reading.
 */
export function lastBack<A extends OutageSpan>(areas: readonly A[]): A | null {
  return areas.reduce<A | null>(
    (chosen, area) => (chosen === null || outranks(area, chosen) ? area : chosen),
    null,
  );
}

/** Whether a place inside both areas follows the first of them. */
export function outranks(area: OutageSpan, other: OutageSpan): boolean {
  const back = ({ backAt }: OutageSpan): number => backAt ?? Infinity;
  if (back(area) !== back(other)) return back(area) > back(other);
  return area.outAt < other.outAt;
}
