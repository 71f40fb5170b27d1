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
  const back = ({ backAt }: A): number => backAt ?? Infinity;
  return areas.reduce<A | null>((chosen, area) => {
    if (chosen === null || back(area) > back(chosen)) return area;
    return back(area) === back(chosen) && area.outAt < chosen.outAt ? area : chosen;
  }, null);
}
