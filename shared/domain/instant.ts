/**
 * A moment, in milliseconds since 1970-01-01T00:00:00Z.
 *
 * One representation serves the rules, the wire and the screen, so nobody has to ask whether a
 * field holds text or a date. Only the screen knows a time zone.
 */
export type Instant = number;

export const MINUTE_MS = 60_000;
export const HOUR_MS = 60 * MINUTE_MS;

export const hoursBetween = (from: Instant, to: Instant): number => (to - from) / HOUR_MS;
export const addHours = (from: Instant, hours: number): Instant => from + hours * HOUR_MS;
export const addMinutes = (from: Instant, minutes: number): Instant => from + minutes * MINUTE_MS;
