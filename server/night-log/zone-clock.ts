import { DateTime } from 'luxon';
import type { LocalDateTime } from '@shared/domain/night-log/local-time';
import type { ZoneClock } from '@shared/domain/night-log/night-clock';

/** Clocks are changed on a quarter of an hour everywhere, so an offset holds for at least so long. */
const QUARTER_MS = 15 * 60_000;
const HALF_DAY_MS = 12 * 60 * 60_000;

/**
 * A region's wall clock by the IANA time zone database.
 *
 * Reading a log asks thousands of times about one night, so offsets are kept.
 */
export function zoneClock(zone: string): ZoneClock {
  const offsets = new Map<number, number>();
  const offsetMs = (at: number): number => {
    const quarter = Math.floor(at / QUARTER_MS);
    const known = offsets.get(quarter);
    if (known !== undefined) return known;
    const offset = DateTime.fromMillis(quarter * QUARTER_MS, { zone }).offset * 60_000;
    offsets.set(quarter, offset);
    return offset;
  };
  return {
    toInstant: ({ year, month, day, hour, minute }: LocalDateTime) => {
      const asUtc = Date.UTC(year, month - 1, day, hour, minute);
      const around = [offsetMs(asUtc - HALF_DAY_MS), offsetMs(asUtc + HALF_DAY_MS)];
      // The larger offset gives the earlier moment; it is the one that counts when an hour comes twice.
      const earlier = Math.max(...around);
      const later = Math.min(...around);
      if (offsetMs(asUtc - earlier) === earlier) return asUtc - earlier;
      return offsetMs(asUtc - later) === later ? asUtc - later : asUtc - earlier;
    },
    toLocal: (at) => {
      const local = new Date(at + offsetMs(at));
      return {
        year: local.getUTCFullYear(),
        month: local.getUTCMonth() + 1,
        day: local.getUTCDate(),
        hour: local.getUTCHours(),
        minute: local.getUTCMinutes(),
      };
    },
  };
}
