import { HOUR_MS, type Instant } from '@shared/domain/instant';
import { clockTime, dayTime, startOfDay } from '../core/zone';

const STEPS_HOURS = [1, 2, 3, 6, 12, 24, 48, 96, 168];

export interface TimeTick {
  readonly value: Instant;
  readonly label: string;
}

/**
 * Round hours of the region between two moments, at most `most` of them; midnight is told with its day.
 *
 * @param zone an IANA name
 */
export function timeTicks(from: Instant, to: Instant, zone: string, most: number): TimeTick[] {
  const hours = STEPS_HOURS.find((step) => (to - from) / (step * HOUR_MS) <= most) ?? 336;
  const ticks: TimeTick[] = [];
  const first = startOfDay(from, zone);
  for (let at = first; at <= to; at += hours * HOUR_MS) {
    if (at < from) continue;
    // Across a clock change the step lands an hour off; midnight is found again from there.
    const label = clockTime(at, zone);
    ticks.push({ value: at, label: label === '00:00' ? dayTime(at, zone) : label });
  }
  return ticks;
}
