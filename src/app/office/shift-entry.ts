import { HOUR_MS, type Instant, MINUTE_MS } from '@shared/domain/instant';
import { instantOnWall, type WallTime, wallAt } from '../intake/wall-clock';

export interface Shift {
  readonly startsAt: Instant;
  readonly endsAt: Instant;
}

/** A shift as a person writes it, in the region's time: `2026-10-03`, `07:00`, `15:30`. */
export interface ShiftEntry {
  readonly date: string;
  readonly from: string;
  readonly to: string;
}

/** Our own bound: whoever writes a longer one has slipped. */
const LONGEST_MS = 18 * HOUR_MS;

const two = (n: number): string => String(n).padStart(2, '0');
const dateText = ({ year, month, day }: WallTime): string => `${year}-${two(month)}-${two(day)}`;
const timeText = ({ hour, minute }: WallTime): string => `${two(hour)}:${two(minute)}`;

export function toEntry({ startsAt, endsAt }: Shift, zone: string): ShiftEntry {
  const start = wallAt(startsAt, zone);
  return { date: dateText(start), from: timeText(start), to: timeText(wallAt(endsAt, zone)) };
}

/**
 * What an entry means, or what is wrong with it. An end that is not after its beginning lies on the
 * next day.
 *
 * @param zone an IANA name
 */
export function fromEntry(entry: ShiftEntry, zone: string): Shift | string {
  const day = /^(\d{4})-(\d{2})-(\d{2})$/.exec(entry.date);
  const from = /^(\d{2}):(\d{2})$/.exec(entry.from);
  const to = /^(\d{2}):(\d{2})$/.exec(entry.to);
  if (!day) return 'Which day?';
  if (!from || !to) return 'From when until when?';
  const at = (time: RegExpExecArray, daysOn: number): Instant =>
    instantOnWall(
      {
        year: Number(day[1]),
        month: Number(day[2]),
        day: Number(day[3]) + daysOn,
        hour: Number(time[1]),
        minute: Number(time[2]),
      },
      zone,
    );
  const startsAt = at(from, 0);
  const sameDay = at(to, 0);
  const endsAt = sameDay > startsAt ? sameDay : at(to, 1);
  if (endsAt - startsAt > LONGEST_MS) return 'A shift of more than 18 hours: is the day right?';
  return { startsAt, endsAt };
}

/** The first two shifts that overlap, if any do. */
export function overlapIn(shifts: readonly Shift[]): readonly [Shift, Shift] | null {
  const sorted = [...shifts].sort((a, b) => a.startsAt - b.startsAt);
  for (const [i, shift] of sorted.entries()) {
    const before = sorted[i - 1];
    if (before && shift.startsAt < before.endsAt) return [before, shift];
  }
  return null;
}

/** A further shift: the day after the last one at the same hours, else today from 7 to 15:30. */
export function nextEntry(entries: readonly ShiftEntry[], now: Instant, zone: string): ShiftEntry {
  const last = [...entries].sort((a, b) => a.date.localeCompare(b.date)).at(-1);
  const read = last && fromEntry(last, zone);
  if (!last || !read || typeof read === 'string') {
    return { date: dateText(wallAt(now, zone)), from: '07:00', to: '15:30' };
  }
  const wall = wallAt(read.startsAt, zone);
  // Noon keeps its day through every change of the clocks.
  const noon = instantOnWall({ ...wall, day: wall.day + 1, hour: 12, minute: 0 }, zone);
  return { ...last, date: dateText(wallAt(noon, zone)) };
}

/** Whether two lists of shifts are the same to the minute. */
export const sameShifts = (a: readonly Shift[], b: readonly Shift[]): boolean =>
  keyOf(a) === keyOf(b);

const keyOf = (shifts: readonly Shift[]): string =>
  shifts
    .map(({ startsAt, endsAt }) =>
      [startsAt, endsAt].map((at) => Math.floor(at / MINUTE_MS)).join('-'),
    )
    .sort()
    .join();
