import type { Instant } from '@shared/domain/instant';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { clockTime, dateTime, dayTime, duration, startOfDay } from '../core/zone';

/** "in 25 min", "now", "2 h 05 ago". */
export function fromNowWords(at: Instant, now: Instant): string {
  const away = at - now;
  if (Math.abs(away) < MINUTE_MS) return 'now';
  return away > 0 ? `in ${duration(away)}` : `${duration(-away)} ago`;
}

/** Within this span a weekday names one day only. */
const WEEK_MS = 6 * 24 * HOUR_MS;

/** "02:40" on the same day, "Thu 19:20" within days, "Mon, Dec 28, 14:29" beyond. */
export function whenWords(at: Instant, now: Instant, timeZone: string): string {
  if (Math.abs(at - now) > WEEK_MS) return dateTime(at, timeZone);
  const isToday = startOfDay(at, timeZone) === startOfDay(now, timeZone);
  return isToday ? clockTime(at, timeZone) : dayTime(at, timeZone);
}
