import { HOUR_MS, type Instant, MINUTE_MS } from '@shared/domain/instant';
import { breaksFault, type ShiftBreak } from '@shared/domain/shift-breaks';
import { instantOnWall, type WallTime, wallAt } from '../intake/wall-clock';

export interface Shift {
  readonly startsAt: Instant;
  readonly endsAt: Instant;
  /** Left out when there are none. */
  readonly breaks?: readonly ShiftBreak[] | undefined;
}

/** A break as a person writes it: it begins between two times of the day and lasts so many minutes. */
export interface BreakEntry {
  readonly from: string;
  readonly to: string;
  readonly minutes: string;
}

/** A shift as a person writes it, in the region's time: `2026-10-03`, `07:00`, `15:30`. */
export interface ShiftEntry {
  readonly date: string;
  readonly from: string;
  readonly to: string;
  /** Left out when there are none. */
  readonly breaks?: readonly BreakEntry[];
}

/** What a shift may have at most; the contract's own bound. */
export const MOST_BREAKS = 3;
/** A first break, in the middle of the day: our estimate. */
export const USUAL_BREAK: BreakEntry = { from: '11:30', to: '13:30', minutes: '30' };

/** Our own bound: whoever writes a longer one has slipped. */
const LONGEST_MS = 18 * HOUR_MS;

const two = (n: number): string => String(n).padStart(2, '0');
const dateText = ({ year, month, day }: WallTime): string => `${year}-${two(month)}-${two(day)}`;
const timeText = ({ hour, minute }: WallTime): string => `${two(hour)}:${two(minute)}`;

export function toEntry({ startsAt, endsAt, breaks = [] }: Shift, zone: string): ShiftEntry {
  const start = wallAt(startsAt, zone);
  return {
    date: dateText(start),
    from: timeText(start),
    to: timeText(wallAt(endsAt, zone)),
    ...(breaks.length > 0
      ? {
          breaks: breaks.map((one) => ({
            from: timeText(wallAt(one.from, zone)),
            to: timeText(wallAt(one.to, zone)),
            minutes: String(one.minutes),
          })),
        }
      : {}),
  };
}

const TIME = /^(\d{2}):(\d{2})$/;

/**
 * What an entry means, or what is wrong with it. An end that is not after its beginning lies on the
 * next day.
 *
 * @param zone an IANA name
 */
export function fromEntry(entry: ShiftEntry, zone: string): Shift | string {
  const day = /^(\d{4})-(\d{2})-(\d{2})$/.exec(entry.date);
  const from = TIME.exec(entry.from);
  const to = TIME.exec(entry.to);
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
  const breaks = (entry.breaks ?? []).map((one) => readBreak(one, startsAt, at));
  const wrong = breaks.find((one) => typeof one === 'string');
  if (wrong !== undefined) return wrong;
  const read = breaks.filter((one) => typeof one !== 'string');
  const fault = breaksFault({ startsAt, endsAt }, read);
  if (fault !== null) return fault;
  return { startsAt, endsAt, ...(read.length > 0 ? { breaks: read } : {}) };
}

/** A time of the day that comes before the shift begins lies on the next day. */
function readBreak(
  entry: BreakEntry,
  startsAt: Instant,
  at: (time: RegExpExecArray, daysOn: number) => Instant,
): ShiftBreak | string {
  const from = TIME.exec(entry.from);
  const to = TIME.exec(entry.to);
  if (!from || !to) return 'A break begins between which times?';
  const minutes = Number(entry.minutes);
  if (!Number.isInteger(minutes) || minutes < 5 || minutes > 180)
    return 'A break takes 5 to 180 minutes.';
  const within = (time: RegExpExecArray): Instant => {
    const sameDay = at(time, 0);
    return sameDay >= startsAt ? sameDay : at(time, 1);
  };
  return { from: within(from), to: within(to), minutes };
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
    .map(({ startsAt, endsAt, breaks = [] }) =>
      [
        startsAt,
        endsAt,
        ...breaks.flatMap(({ from, to, minutes }) => [from, to, minutes * MINUTE_MS]),
      ]
        .map((at) => Math.floor(at / MINUTE_MS))
        .join('-'),
    )
    .sort()
    .join();
