import { MINUTE_MS, type Instant } from './instant';
import type { ShiftBreak } from './shift-breaks';
import type { Skill } from './skills';
import type { LonLat } from './travel/great-circle';

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
  /** Left out when there are none. */
  readonly breaks?: readonly ShiftBreak[];
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

/**
 * The shift in which a promised arrival falls; the last one when it is later than all.
 *
 * @param mostOvertimeMinutes nobody is planned to work longer than this past the end of a shift
 */
export function shiftOf(
  shifts: readonly WorkShift[],
  arriveAt: Instant,
  mostOvertimeMinutes: number,
): number {
  const overtime = mostOvertimeMinutes * MINUTE_MS;
  const index = shifts.findIndex((shift) => shift.endsAt + overtime > arriveAt);
  return index < 0 ? shifts.length - 1 : index;
}
