import { MINUTE_MS, type Instant } from '@shared/domain/instant';

/** A moment as the clock on a wall in the region shows it; month 1 to 12, weekday 0 is Sunday. */
export interface WallTime {
  readonly year: number;
  readonly month: number;
  readonly day: number;
  readonly hour: number;
  readonly minute: number;
  readonly weekday: number;
}

const formats = new Map<string, Intl.DateTimeFormat>();

function formatOf(zone: string): Intl.DateTimeFormat {
  const known = formats.get(zone);
  if (known) return known;
  const made = new Intl.DateTimeFormat('en-US', {
    timeZone: zone,
    hourCycle: 'h23',
    year: 'numeric',
    month: '2-digit',
    day: '2-digit',
    hour: '2-digit',
    minute: '2-digit',
  });
  formats.set(zone, made);
  return made;
}

export function wallAt(at: Instant, zone: string): WallTime {
  const parts = new Map(
    formatOf(zone)
      .formatToParts(at)
      .map(({ type, value }) => [type, value]),
  );
  const read = (part: Intl.DateTimeFormatPartTypes) => Number(parts.get(part));
  const wall = {
    year: read('year'),
    month: read('month'),
    day: read('day'),
    hour: read('hour'),
    minute: read('minute'),
  };
  return { ...wall, weekday: new Date(utcOf(wall)).getUTCDay() };
}

/**
 * The moment at which the wall shows this time. A day outside its month counts on. A time that the
 * clocks skip in spring becomes the moment as far after the change; one that comes twice in autumn
 * is the earlier, which is the cautious reading of when the power went.
 */
export function instantOnWall(wall: Omit<WallTime, 'weekday'>, zone: string): Instant {
  const wanted = utcOf(wall);
  const offsetAt = (at: Instant) =>
    utcOf(wallAt(at, zone)) - Math.floor(at / MINUTE_MS) * MINUTE_MS;
  const day = 24 * 60 * MINUTE_MS;
  const before = wanted - offsetAt(wanted - day);
  const after = wanted - offsetAt(wanted + day);
  const fitting = [before, after].filter((at) => at + offsetAt(at) === wanted);
  return fitting.length > 0 ? Math.min(...fitting) : before;
}

const utcOf = ({ year, month, day, hour, minute }: Omit<WallTime, 'weekday'>): number =>
  Date.UTC(year, month - 1, day, hour, minute);
