import type { Instant } from '@shared/domain/instant';
import { MINUTE_MS } from '@shared/domain/instant';
import { clockTime, dayTime, duration, startOfDay } from '../core/zone';

/** "in 25 min", "now", "2 h 05 ago". */
export function fromNowWords(at: Instant, now: Instant): string {
  const away = at - now;
  if (Math.abs(away) < MINUTE_MS) return 'now';
  return away > 0 ? `in ${duration(away)}` : `${duration(-away)} ago`;
}

/** "02:40" on the same day, "Thu 19:20" on another. */
export function whenWords(at: Instant, now: Instant, timeZone: string): string {
  const isToday = startOfDay(at, timeZone) === startOfDay(now, timeZone);
  return isToday ? clockTime(at, timeZone) : dayTime(at, timeZone);
}
