import { HOUR_MS, type Instant } from '../instant';

/**
 * How much of an average hour's ringing each hour of the local day brings. Our estimate, no source:
 * people find a warm refrigerator when they are awake, and those who would have rung at night do so
 * when they get up.
 */
const NIGHT = 0.2;
const MORNING = 2.6;
const HOURLY = Array.from({ length: 24 }, (_, hour) =>
  hour >= 23 || hour < 6 ? NIGHT : hour < 9 ? MORNING : 1,
);
const MEAN = HOURLY.reduce((sum, one) => sum + one, 0) / 24;
/** Ringing hours from local midnight to the start of each hour; 24 to the end of the day. */
const UNTIL = HOURLY.reduce<number[]>((sums, one) => [...sums, sums.at(-1)! + one / MEAN], [0]);

/**
 * A clock that stands almost still at night: counted on it, the way in which people ring is the same at
 * all times of day. One ringing hour is an hour of an average day.
 *
 * @param zoneOffsetMs local time less UTC; a change of the clocks within the forecast is left out
 */
export class RingClock {
  constructor(private readonly zoneOffsetMs: number) {}

  /** Ringing hours since 1970. */
  at(moment: Instant): number {
    const local = (moment + this.zoneOffsetMs) / HOUR_MS;
    const day = Math.floor(local / 24);
    const hours = local - day * 24;
    const hour = Math.min(23, Math.floor(hours));
    return day * 24 + UNTIL[hour]! + ((hours - hour) * HOURLY[hour]!) / MEAN;
  }

  between(from: Instant, to: Instant): number {
    return this.at(to) - this.at(from);
  }

  /** The moment at which this clock shows `ringingHours`. */
  moment(ringingHours: number): Instant {
    const day = Math.floor(ringingHours / 24);
    const left = ringingHours - day * 24;
    let hour = 0;
    while (hour < 23 && UNTIL[hour + 1]! <= left) hour++;
    const hours = hour + ((left - UNTIL[hour]!) * MEAN) / HOURLY[hour]!;
    return (day * 24 + hours) * HOUR_MS - this.zoneOffsetMs;
  }
}
