import { DateTime } from 'luxon';
import type { LocalDateTime } from '@shared/domain/night-log/local-time';
import type { ZoneClock } from '@shared/domain/night-log/night-clock';

/**
 * A region's wall clock by the IANA time zone database.
 *
 * Reading a log asks for the same minutes many times over, so answers are kept; a night has few.
 */
export function zoneClock(zone: string): ZoneClock {
  const known = new Map<string, number>();
  return {
    toInstant: ({ year, month, day, hour, minute }: LocalDateTime) => {
      const key = `${year}-${month}-${day}T${hour}:${minute}`;
      const cached = known.get(key);
      if (cached !== undefined) return cached;
      // Day 31 of a short month, as a hurried hand writes it, runs on into the next.
      const at = DateTime.fromObject({ year, month, day: 1, hour, minute }, { zone })
        .plus({ days: day - 1 })
        .toMillis();
      known.set(key, at);
      return at;
    },
    toLocal: (at) => {
      const { year, month, day, hour, minute } = DateTime.fromMillis(at, { zone });
      return { year, month, day, hour, minute };
    },
  };
}
