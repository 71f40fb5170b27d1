import { HOUR_MS, MINUTE_MS, type Instant } from './instant';
import type { Skill } from './skills';
import type { LonLat } from './travel/great-circle';
import type { TravelTimes } from './travel/travel-times';

/** The states of a stop that is still to be done. */
export type RouteStopState = 'planned' | 'offered' | 'accepted' | 'travelling' | 'on-site';

export interface RouteStop {
  readonly state: RouteStopState;
  /** Locked by a person against the planner. */
  readonly locked: boolean;
}

export interface WorkShift {
  readonly startsAt: Instant;
  readonly endsAt: Instant;
}

/** Whether the stop is the technician's by their own word. */
export const isFirmStop = (state: RouteStopState): boolean =>
  state === 'accepted' || state === 'travelling' || state === 'on-site';

/** Whether the technician is on the way to it or there: only one stop at a time can be that. */
export const isUnderWay = (state: RouteStopState): boolean =>
  state === 'travelling' || state === 'on-site';

/** How many stops at the head of a route nobody may be put before: up to the last firm one. */
export const firmCount = (stops: readonly RouteStop[]): number =>
  stops.findLastIndex((stop) => isFirmStop(stop.state)) + 1;

/**
 * How many stops at the head of a route a plan leaves alone: up to the last firm or locked one. The
 * stops before a locked one stay as well, or it would move with them.
 */
export const heldCount = (stops: readonly RouteStop[]): number =>
  stops.findLastIndex((stop) => isFirmStop(stop.state) || stop.locked) + 1;

/** The place that a stop gets when somebody asks for one: never before a firm stop. */
export const placeOnRoute = (others: readonly RouteStop[], asked: number): number =>
  Math.min(Math.max(asked, firmCount(others)), others.length);

/**
 * What has to happen to the offers of a route: the first stop is on offer until it is accepted, and
 * no other is. So a technician never has two offers at once, and none while at work on a stop.
 */
export function offersDue(stops: readonly RouteStop[]): {
  readonly offer: number | null;
  readonly withdraw: readonly number[];
} {
  return {
    offer: stops[0]?.state === 'planned' ? 0 : null,
    withdraw: stops.flatMap((stop, index) => (index > 0 && stop.state === 'offered' ? index : [])),
  };
}

export const missingSkills = (needed: readonly Skill[], has: readonly Skill[]): Skill[] =>
  needed.filter((skill) => !has.includes(skill));

/** Where somebody was seen, and when. */
export interface Sighting {
  readonly at: LonLat;
  readonly seenAt: Instant;
}

/** The newest place that a technician is known to have been at. */
export const lastSeen = (home: LonLat, sightings: readonly Sighting[]): LonLat =>
  sightings.reduce<Sighting>((newest, one) => (one.seenAt >= newest.seenAt ? one : newest), {
    at: home,
    seenAt: -Infinity,
  }).at;

/** Nobody is planned to work longer than this past the end of a shift; the planner's own limit. */
const MOST_OVERTIME_MS = HOUR_MS;

/** The shift in which a promised arrival falls; the last one when it is later than all. */
export function shiftOf(shifts: readonly WorkShift[], arriveAt: Instant): number {
  const index = shifts.findIndex((shift) => shift.endsAt + MOST_OVERTIME_MS > arriveAt);
  return index < 0 ? shifts.length - 1 : index;
}

export interface TimedStop extends RouteStop {
  /** Null for a household whose place nobody knows yet: no drive to it can be counted. */
  readonly lonLat: LonLat | null;
  readonly arriveAt: Instant;
  readonly driveMinutes: number;
  /** As it was found last. */
  readonly isUnreachable?: boolean;
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
  /** In their order, those that are over left out. */
  readonly shifts: readonly WorkShift[];
}

/**
 * When each stop of a route is reached and left, in the order of the route. A stop under way keeps
 * the arrival that is known of it; a stop that was promised for a later shift waits for that shift.
 */
export function routeTimes(
  { now, at, home, shifts }: RouteStart,
  stops: readonly TimedStop[],
  travel: TravelTimes,
  serviceMinutes: number,
): StopTimes[] {
  const service = serviceMinutes * MINUTE_MS;
  let place = at;
  let free = now;
  let shift = -1;
  return stops.map((stop) => {
    if (isUnderWay(stop.state)) {
      place = stop.lonLat ?? place;
      free = Math.max(now, stop.arriveAt + service);
      // Whoever is there has reached it; for one on the way the command that moved it knows better.
      const isReachable = stop.state === 'on-site' || !stop.isUnreachable;
      return {
        arriveAt: stop.arriveAt,
        finishAt: free,
        driveMinutes: stop.driveMinutes,
        isReachable,
      };
    }
    const promised = Math.max(shift, shiftOf(shifts, stop.arriveAt));
    const begins = shifts[promised]?.startsAt ?? -Infinity;
    // The first shift may have begun; whoever starts a shift later starts it at home.
    if (promised > shift && begins > free) place = home;
    shift = promised;
    free = Math.max(free, begins);
    const found = stop.lonLat ? drive(travel, place, stop.lonLat) : 0;
    const isReachable = Number.isFinite(found);
    // A stop stays where it is and shows some time; a warning says that it cannot be kept.
    const driveMs = isReachable ? found : stop.driveMinutes * MINUTE_MS;
    const arriveAt = free + driveMs;
    place = stop.lonLat ?? place;
    free = arriveAt + service;
    return { arriveAt, finishAt: free, driveMinutes: driveMs / MINUTE_MS, isReachable };
  });
}

/** Milliseconds from door to door; Infinity where no open road leads. */
export const drive = (travel: TravelTimes, from: LonLat, to: LonLat): number =>
  (travel.matrix([from, to])[1] ?? 0) * 1000;
