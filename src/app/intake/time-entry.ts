import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { readWhen, type WhenSaid } from '@shared/domain/night-log/local-time';
import { instantOnWall, wallAt } from './wall-clock';

export type TimeEntry =
  | { readonly kind: 'moment'; readonly at: Instant }
  | { readonly kind: 'blank' }
  | { readonly kind: 'unreadable'; readonly why: string };

const AGO = new RegExp(
  '^(?:about |~ ?)?(?:' +
    // 4 h 20 min
    String.raw`(?<hours>\d{1,3}(?:[.,]\d{1,2})?) ?(?:h|hrs?|hours?)(?: ?(?:and )?(?<minutes>\d{1,2}) ?(?:m|min|mins|minutes?))?|` +
    String.raw`(?<onlyMinutes>\d{1,4}) ?(?:m|min|mins|minutes?)|` +
    String.raw`(?<days>\d{1,2}) ?(?:d|days?)|` +
    String.raw`(?<bare>\d{1,2}(?:[.,]\d{1,2})?)` +
    ')(?: ago)?$',
);

/**
 * Reads a moment in the past as a dispatcher types it while listening: "4 h ago", "4h", "90 min",
 * "22:30", "10:30p", "yesterday 22:30", "Tue 6a". A bare number counts hours back; a bare time is
 * the last one that has been.
 *
 * @param zone the region's time zone, an IANA name
 */
export function readTimeEntry(raw: string, now: Instant, zone: string): TimeEntry {
  const text = raw.trim().toLowerCase().replace(/\s+/g, ' ');
  if (text === '') return { kind: 'blank' };
  if (text === 'now' || text === 'just now') return { kind: 'moment', at: now };
  const ago = AGO.exec(text)?.groups;
  if (ago) return { kind: 'moment', at: now - agoMilliseconds(ago) };
  // "6h" above is a length; what follows is a time on the clock.
  const said = readWhen(text);
  if (said.rest !== '' || (said.clock === null && said.instant === null)) {
    return { kind: 'unreadable', why: 'Write it as 4 h ago, 22:30 or yesterday 22:30.' };
  }
  const at = said.instant ?? lastSuchMoment(said, now, zone);
  if (at === null) return { kind: 'unreadable', why: 'Which day? Write it as Tue 22:30.' };
  if (at > now) return { kind: 'unreadable', why: 'That is still to come.' };
  return { kind: 'moment', at };
}

function agoMilliseconds(parts: Readonly<Record<string, string | undefined>>): number {
  const number = (name: string) => Number((parts[name] ?? '0').replace(',', '.'));
  return (
    (number('hours') + number('bare') + number('days') * 24) * HOUR_MS +
    (number('minutes') + number('onlyMinutes')) * MINUTE_MS
  );
}

/** The latest moment up to now that fits what was said. */
function lastSuchMoment(said: WhenSaid, now: Instant, zone: string): Instant | null {
  const { clock, date } = said;
  if (clock === null) return null;
  const hours = clock.half === 'unknown' ? [clock.hour % 12, (clock.hour % 12) + 12] : [clock.hour];
  const today = wallAt(now, zone);
  const moments: Instant[] = [];
  for (const hour of hours) {
    for (const daysBack of daysMeant(date, today)) {
      moments.push(
        instantOnWall({ ...today, day: today.day - daysBack, hour, minute: clock.minute }, zone),
      );
    }
    if (date?.kind === 'full') {
      const year = date.year ?? today.year;
      const { month, day } = date;
      moments.push(instantOnWall({ year, month, day, hour, minute: clock.minute }, zone));
    }
  }
  const past = moments.filter((moment) => moment <= now);
  if (past.length > 0) return Math.max(...past);
  return moments.length > 0 ? Math.min(...moments) : null;
}

function daysMeant(date: WhenSaid['date'], today: { readonly weekday: number }): readonly number[] {
  if (date === null) return [0, 1];
  if (date.kind === 'relative') return [-date.days];
  if (date.kind === 'weekday') return [(today.weekday - date.weekday + 7) % 7];
  return [];
}
