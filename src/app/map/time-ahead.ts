import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { readWhen, type WhenSaid } from '@shared/domain/night-log/local-time';
import { instantOnWall, wallAt } from '../intake/wall-clock';
import { readTimeEntry, type TimeEntry } from '../intake/time-entry';

const LENGTH = new RegExp(
  '^in ' +
    String.raw`(?:(?<hours>\d{1,3}(?:[.,]\d{1,2})?) ?(?:h|hrs?|hours?)(?: ?(?<minutes>\d{1,2}) ?(?:m|min|mins|minutes?))?|` +
    String.raw`(?<onlyMinutes>\d{1,4}) ?(?:m|min|mins|minutes?)|(?<days>\d{1,2}) ?(?:d|days?))$`,
);
const OVER: TimeEntry = { kind: 'unreadable', why: 'That is over already.' };
const WHY = 'Write it as in 3 h, 18:00 or Fri 6:00.';

/**
 * Reads a moment to come as a dispatcher types it: "in 3 h", "18:00", "tomorrow 6:00", "Fri 6a". A bare
 * time is the next one that comes.
 *
 * @param zone the region's time zone, an IANA name
 */
export function readTimeAhead(raw: string, now: Instant, zone: string): TimeEntry {
  const text = raw.trim().toLowerCase().replace(/\s+/g, ' ');
  if (text === '') return { kind: 'blank' };
  const length = LENGTH.exec(text)?.groups;
  if (length) return { kind: 'moment', at: now + lengthMs(length) };
  const isTomorrow = /^tomorrow\b/.test(text);
  const said = readWhen(text.replace(/^(tomorrow|tonight|today)[, ]*/, ''));
  if (said.rest !== '' || said.clock === null) return { kind: 'unreadable', why: WHY };
  if (said.date?.kind === 'relative' && said.date.days < 0) return OVER;
  const at = nextSuchMoment(said, now, zone, isTomorrow);
  if (at === null) return { kind: 'unreadable', why: WHY };
  return at > now ? { kind: 'moment', at } : OVER;
}

/**
 * Reads when something begins: "now", "2 h ago", "in 3 h", or a time of the clock, which is then the one
 * nearest to now.
 */
export function readTimeAround(raw: string, now: Instant, zone: string): TimeEntry {
  const past = readTimeEntry(raw, now, zone);
  const ahead = readTimeAhead(raw, now, zone);
  if (past.kind !== 'moment')
    return ahead.kind === 'unreadable' ? { ...ahead, why: AROUND } : ahead;
  if (ahead.kind !== 'moment') return past;
  return ahead.at - now < now - past.at ? ahead : past;
}

const AROUND = 'Write it as now, 2 h ago, in 3 h, 18:00 or Fri 6:00.';

function lengthMs(parts: Readonly<Record<string, string | undefined>>): number {
  const number = (name: string) => Number((parts[name] ?? '0').replace(',', '.'));
  return (
    (number('hours') + number('days') * 24) * HOUR_MS +
    (number('minutes') + number('onlyMinutes')) * MINUTE_MS
  );
}

function nextSuchMoment(
  { clock, date }: WhenSaid,
  now: Instant,
  zone: string,
  isTomorrow: boolean,
): Instant | null {
  if (clock === null) return null;
  const today = wallAt(now, zone);
  const hours = clock.half === 'unknown' ? [clock.hour % 12, (clock.hour % 12) + 12] : [clock.hour];
  const onDay = (daysAhead: number): Instant[] =>
    hours.map((hour) =>
      instantOnWall({ ...today, day: today.day + daysAhead, hour, minute: clock.minute }, zone),
    );
  if (date?.kind === 'full') {
    const { year = today.year, month, day } = date;
    return instantOnWall(
      { year: year ?? today.year, month, day, hour: clock.hour, minute: clock.minute },
      zone,
    );
  }
  const days =
    date?.kind === 'weekday'
      ? [(date.weekday - today.weekday + 7) % 7, ((date.weekday - today.weekday + 7) % 7) + 7]
      : isTomorrow
        ? [1]
        : [0, 1];
  const ahead = days.flatMap(onDay).filter((at) => at > now);
  return ahead.length > 0 ? Math.min(...ahead) : null;
}
