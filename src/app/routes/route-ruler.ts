import { HOUR_MS, type Instant, MINUTE_MS } from '@shared/domain/instant';
import { startOfDay } from '../core/zone';

/** The stretch of time that all rows of the routes screen share. */
export interface RulerSpan {
  readonly from: Instant;
  readonly to: Instant;
}

/** Pixels to the hour, from a whole shift at a glance to single minutes. */
export const ZOOMS: readonly number[] = [36, 60, 90, 140, 220];
export const FIRST_ZOOM = 2;

/** So much of what has been stays in sight, for stops that are under way. */
const BEFORE_NOW_MS = HOUR_MS;
/** A backlog of several shifts is planned ahead; beyond four days the ruler would be endless. */
const MOST_MS = 96 * HOUR_MS;
/** A shift that begins later than this is not shown while no stop lies in it. */
const SOON_MS = 12 * HOUR_MS;

export interface Timed {
  readonly arriveAt: Instant;
  readonly finishAt: Instant;
}

/** Whole hours around now, the stops, and the shifts that run or begin soon. */
export function spanOf(
  now: Instant,
  shifts: readonly { readonly startsAt: Instant; readonly endsAt: Instant }[],
  stops: readonly Timed[],
): RulerSpan {
  const running = shifts.filter((s) => s.endsAt > now && s.startsAt < now + SOON_MS);
  const from = Math.min(now - BEFORE_NOW_MS, ...stops.map((stop) => stop.arriveAt));
  const to = Math.max(
    now + 4 * HOUR_MS,
    ...running.map((shift) => shift.endsAt),
    ...stops.map((stop) => stop.finishAt),
  );
  const first = Math.floor(Math.max(from, now - 6 * HOUR_MS) / HOUR_MS) * HOUR_MS;
  return { from: first, to: Math.min(Math.ceil(to / HOUR_MS) * HOUR_MS, first + MOST_MS) };
}

/** Where a moment stands, in pixels from the ruler's left end; never outside of it. */
export function xOf(at: Instant, span: RulerSpan, pxPerHour: number): number {
  const inside = Math.min(Math.max(at, span.from), span.to);
  return ((inside - span.from) / HOUR_MS) * pxPerHour;
}

export const widthOf = (span: RulerSpan, pxPerHour: number): number =>
  ((span.to - span.from) / HOUR_MS) * pxPerHour;

/** What stands at a place of the ruler. */
export const timeAt = (x: number, span: RulerSpan, pxPerHour: number): Instant =>
  span.from + (x / pxPerHour) * HOUR_MS;

export interface BlockPlace {
  readonly x: number;
  readonly width: number;
  /** The drive before it: from here to `x`. */
  readonly driveX: number;
}

/** A block is never narrower than a finger of a mouse can hit (WCAG 2.2, 2.5.8). */
const LEAST_BLOCK_PX = 24;

/** Where a stop's block and the drive to it stand. */
export function blockOf(
  stop: Timed & { readonly driveMinutes: number },
  span: RulerSpan,
  pxPerHour: number,
): BlockPlace {
  const x = xOf(stop.arriveAt, span, pxPerHour);
  const end = xOf(stop.finishAt, span, pxPerHour);
  const driveX = xOf(stop.arriveAt - stop.driveMinutes * MINUTE_MS, span, pxPerHour);
  return { x, width: Math.max(end - x, LEAST_BLOCK_PX), driveX };
}

export interface HourTick {
  readonly at: Instant;
  readonly x: number;
  /** Whether its hour is written; between them only a line stands. */
  readonly isLabelled: boolean;
  readonly isMidnight: boolean;
}

const LEAST_LABEL_PX = 56;

/** The hours of the ruler; as many of them are labelled as there is room for. */
export function ticksOf(span: RulerSpan, pxPerHour: number, timeZone: string): HourTick[] {
  const every = Math.ceil(LEAST_LABEL_PX / pxPerHour);
  const ticks: HourTick[] = [];
  for (let at = span.from; at <= span.to; at += HOUR_MS) {
    const hoursOfDay = Math.round((at - startOfDay(at, timeZone)) / HOUR_MS);
    ticks.push({
      at,
      x: xOf(at, span, pxPerHour),
      isLabelled: hoursOfDay % every === 0,
      isMidnight: hoursOfDay === 0,
    });
  }
  return ticks;
}

/**
 * The place on a route that a moment means: before the first stop whose middle lies after it.
 *
 * @param others the route without the stop that is placed
 */
export function placeAt(at: Instant, others: readonly Timed[]): number {
  const index = others.findIndex((stop) => (stop.arriveAt + stop.finishAt) / 2 > at);
  return index < 0 ? others.length : index;
}
