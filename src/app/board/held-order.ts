/**
 * The order of the queue's rows as they stand on the screen. While somebody reads or works in the
 * rows the order is held: rows change in place, but none moves, comes or goes under the cursor.
 */
export interface HeldOrder {
  /** Ids of calls, top to bottom. */
  readonly ids: readonly string[];
  /** Calls that came in since and are not shown yet. */
  readonly newer: number;
  /** Shown calls that left the list, because they were settled or no longer match the filter. */
  readonly gone: number;
  /** Shown calls that would stand elsewhere in the live order. */
  readonly moved: number;
}

export const EMPTY_ORDER: HeldOrder = { ids: [], newer: 0, gone: 0, moved: 0 };

/** The live order, taken as it is. */
export const takeOrder = (live: readonly string[]): HeldOrder => ({
  ids: live,
  newer: 0,
  gone: 0,
  moved: 0,
});

/** What stays on the screen while the order is held, and how far the live order has gone on. */
export function holdOrder(shown: readonly string[], live: readonly string[]): HeldOrder {
  const shownIds = new Set(shown);
  const liveIds = new Set(live);
  const newer = live.reduce((count, id) => count + (shownIds.has(id) ? 0 : 1), 0);
  const gone = shown.reduce((count, id) => count + (liveIds.has(id) ? 0 : 1), 0);
  const kept = shown.filter((id) => liveIds.has(id));
  const wanted = live.filter((id) => shownIds.has(id));
  return { ids: shown, newer, gone, moved: kept.length - longestCommonOrder(kept, wanted) };
}

/**
 * The order to show next.
 *
 * @param held whether somebody is reading or working in the rows
 */
export function nextOrder(previous: HeldOrder, live: readonly string[], held: boolean): HeldOrder {
  // With nothing on the screen there is nothing to keep still.
  return held && previous.ids.length > 0 ? holdOrder(previous.ids, live) : takeOrder(live);
}

/** One line that says what waits behind a held order; empty when nothing does. */
export function heldWords({ newer, gone, moved }: HeldOrder): string {
  const parts = [
    newer > 0 ? `${newer} newer` : '',
    moved > 0 ? `${moved} moved` : '',
    gone > 0 ? `${gone} gone` : '',
  ].filter((part) => part !== '');
  return parts.length === 0 ? '' : `${parts.join(', ')}: press U to take the new order`;
}

/**
 * How many of the ids keep their order among themselves: the length of the longest increasing run
 * of places (patience sorting, n log n). The others are those that moved.
 */
function longestCommonOrder(from: readonly string[], to: readonly string[]): number {
  const placeOf = new Map(to.map((id, place) => [id, place]));
  const tails: number[] = [];
  for (const id of from) {
    const place = placeOf.get(id) ?? 0;
    let low = 0;
    let high = tails.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if ((tails[middle] ?? 0) < place) low = middle + 1;
      else high = middle;
    }
    tails[low] = place;
  }
  return tails.length;
}
