import { isFirmStop, type RouteStop } from './route-rules';
import type { Part } from './skills';

export type Stock = Readonly<Partial<Record<Part, number>>>;

/** A stop as the loading of its van sees it. */
export interface SuppliedStop extends RouteStop {
  /** Every part that the visit is to have at hand. */
  readonly needs: readonly Part[];
  /** What is fetched on the way to it, as it was found last. */
  readonly fetches: Stock | null;
}

/**
 * What a van fetches at the store, and on the way to which stop: once, before the first visit that lacks
 * a part, all that the visits from there on lack. Where a plan has chosen an earlier stop for it, it stays.
 * Nobody is sent away from a stop that they accepted, so accepted stops fetch nothing anew.
 *
 * @param van what is on it now
 * @returns for each stop what is fetched on the way to it, `null` for nothing
 */
export function fetchesOn(stops: readonly SuppliedStop[], van: Stock): (Stock | null)[] {
  const left = new Map<Part, number>(Object.entries(van) as [Part, number][]);
  const lacking = new Map<Part, number>();
  let firstLacking = -1;
  stops.forEach((stop, index) => {
    // On the way there by the store: it will be on the van.
    if (stop.state === 'travelling' && stop.fetches) add(left, stop.fetches);
    for (const part of stop.needs) {
      const have = left.get(part) ?? 0;
      if (have > 0) left.set(part, have - 1);
      else if (!isFirmStop(stop.state)) {
        lacking.set(part, (lacking.get(part) ?? 0) + 1);
        if (firstLacking < 0) firstLacking = index;
      }
    }
  });
  const chosen = stops.findIndex(
    (stop, index) => stop.fetches && !isFirmStop(stop.state) && index <= firstLacking,
  );
  const holder = chosen >= 0 ? chosen : firstLacking;
  return stops.map((stop, index) => {
    if (isFirmStop(stop.state)) return stop.fetches;
    return index === holder ? Object.fromEntries(lacking) : null;
  });
}

function add(stock: Map<Part, number>, more: Stock): void {
  for (const [part, count] of Object.entries(more) as [Part, number][])
    stock.set(part, (stock.get(part) ?? 0) + count);
}

/** What is on a van after more was loaded. */
export const loaded = (van: Stock, more: Stock): Partial<Record<Part, number>> => {
  const stock = new Map<Part, number>(Object.entries(van) as [Part, number][]);
  add(stock, more);
  return Object.fromEntries(stock);
};
