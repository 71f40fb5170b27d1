import { MINUTE_MS, type Instant } from './instant';
import { isUnderWay, shiftOf, type RouteStop, type WorkShift } from './route-rules';
import { afterBreaks, type ShiftBreak } from './shift-breaks';
import type { LonLat } from './travel/great-circle';
import type { TravelTimes } from './travel/travel-times';

export interface TimedStop extends RouteStop {
  /** Null for a household whose place nobody knows yet: no drive to it can be counted. */
  readonly lonLat: LonLat | null;
  readonly arriveAt: Instant;
  readonly driveMinutes: number;
  readonly serviceMinutes: number;
  /** When the customer expects the visit to begin; who comes earlier waits. */
  readonly window?: TimeWindow | null;
  /** Whether the van drives by the store on the way to it. */
  readonly fetches?: boolean;
  /** As it was found last. */
  readonly isUnreachable?: boolean;
}

export interface TimeWindow {
  readonly from: Instant;
  readonly to: Instant;
}

export interface StopTimes {
  readonly arriveAt: Instant;
  readonly finishAt: Instant;
  readonly driveMinutes: number;
  /** False where no open road leads there from the place before; the drive is then the one of before. */
  readonly isReachable: boolean;
}

export interface RouteStart {
  readonly now: Instant;
  /** Where the technician is now. */
  readonly at: LonLat;
  /** Where every later shift begins. */
  readonly home: LonLat;
  /** In their order, those that are over left out, and breaks that were taken. */
  readonly shifts: readonly WorkShift[];
  /** The store, and how long a stop there takes; `null`: nothing is fetched. */
  readonly shop: { readonly at: LonLat; readonly minutes: number } | null;
  readonly mostOvertimeMinutes: number;
}

/** When a visit begins for whoever arrives then: not before the window opens, and late at once. */
export const beginsAt = (arriveAt: Instant, window: TimeWindow | null | undefined): Instant =>
  window && arriveAt <= window.to ? Math.max(arriveAt, window.from) : arriveAt;

/**
 * When each stop of a route is reached and left, in the order of the route, by the planner's own rules of
 * breaks, windows and the store. A stop under way keeps the arrival that is known of it; a stop that was
 * promised for a later shift waits for that shift.
 */
export function routeTimes(
  { now, at, home, shifts, shop, mostOvertimeMinutes }: RouteStart,
  stops: readonly TimedStop[],
  travel: TravelTimes,
): StopTimes[] {
  let place = at;
  let free = now;
  let shift = -1;
  let due: ShiftBreak[] = [];

  return stops.map((stop) => {
    const service = stop.serviceMinutes * MINUTE_MS;
    const doneFrom = (arriveAt: Instant): Instant => beginsAt(arriveAt, stop.window) + service;
    if (isUnderWay(stop.state)) {
      place = stop.lonLat ?? place;
      free = Math.max(
        now,
        stop.state === 'on-site' ? stop.arriveAt + service : doneFrom(stop.arriveAt),
      );
      // Whoever is there has reached it; for one on the way the command that moved it knows better.
      const isReachable = stop.state === 'on-site' || !stop.isUnreachable;
      return {
        arriveAt: stop.arriveAt,
        finishAt: free,
        driveMinutes: stop.driveMinutes,
        isReachable,
      };
    }
    const promised = Math.max(shift, shiftOf(shifts, stop.arriveAt, mostOvertimeMinutes));
    const begins = shifts[promised]?.startsAt ?? -Infinity;
    // The first shift may have begun; whoever starts a shift later starts it at home.
    if (promised > shift && begins > free) place = home;
    if (promised > shift) due = [...(shifts[promised]?.breaks ?? [])];
    shift = promised;
    free = Math.max(free, begins);

    let driven = 0;
    if (stop.fetches && shop) {
      const there = drive(travel, place, shop.at);
      const leaves = (setsOff: Instant): Instant => setsOff + there + shop.minutes * MINUTE_MS;
      if (Number.isFinite(there)) {
        free = leaves(afterBreaks(free, due, leaves));
        place = shop.at;
        driven = there;
      }
    }
    const found = stop.lonLat ? drive(travel, place, stop.lonLat) : 0;
    const isReachable = Number.isFinite(found);
    // A stop stays where it is and shows some time; a warning says that it cannot be kept.
    const driveMs = isReachable ? found : stop.driveMinutes * MINUTE_MS;
    const setsOff = afterBreaks(free, due, (from) => doneFrom(from + driveMs));
    const arriveAt = setsOff + driveMs;
    place = stop.lonLat ?? place;
    free = doneFrom(arriveAt);
    const driveMinutes = (driven + driveMs) / MINUTE_MS;
    return { arriveAt, finishAt: free, driveMinutes, isReachable };
  });
}

/** Milliseconds from door to door; Infinity where no open road leads. */
export const drive = (travel: TravelTimes, from: LonLat, to: LonLat): number =>
  (travel.matrix([from, to])[1] ?? 0) * 1000;
