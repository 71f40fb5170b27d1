import { HOUR_MS, MINUTE_MS } from '../instant';
import type { Instant } from '../instant';
import type { ClockSaid, DateSaid, LocalDate, LocalDateTime, WhenSaid } from './local-time';

/** The region's wall clock; a time zone's rules live outside the domain. */
export interface ZoneClock {
  /** A wall-clock time that a change of the clocks skips or repeats gives the earlier moment. */
  readonly toInstant: (local: LocalDateTime) => Instant;
  readonly toLocal: (at: Instant) => LocalDateTime;
}

/** Between which moments the calls of this log can have come in. */
export interface NightSpan {
  readonly from: Instant;
  readonly to: Instant;
}

/** What one row says about when its call came in. */
export interface ReceivedSaid {
  readonly when: WhenSaid | null;
  /** A day that stood on a line of its own, or in the date cell of a row above. */
  readonly dayAbove: DateSaid | null;
}

export interface Received {
  readonly at: Instant;
  readonly is: 'read' | 'estimated';
  readonly doubt: string | null;
}

export type DateOrder = 'month-first' | 'day-first';

/** A call logged a little late is no sign of a day gone by; twelve hours back is. */
const BACK_COSTS = 3;
const SLACK_MS = 90 * MINUTE_MS;
const FAR_MS = 36 * HOUR_MS;

/**
 * Puts every row of a log on the time line.
 *
 * Times without a day, or without "a" or "p", are settled by the night that the log covers and by the
 * rows around them, in the order of the file, whichever end the service began at.
 */
export function placeNight(
  said: readonly ReceivedSaid[],
  zone: ZoneClock,
  span: NightSpan,
): readonly Received[] {
  const order = dateOrder(
    said.map(({ when }) => when?.date ?? null),
    zone,
    span,
  );
  const is24 = said.some(({ when }) => when?.clock?.style === '24h');
  const options = said.map((one) => optionsOf(one, { zone, span, order, is24 }));
  const backwards = runsBackwards(options);
  const sequence = said.map((_, i) => i);
  if (backwards) sequence.reverse();

  const placed: (Received | null)[] = said.map(() => null);
  let before: Instant | null = null;
  for (const i of sequence) {
    const choice = choose(options[i] ?? [], before, span);
    if (choice === null) continue;
    placed[i] = { at: choice, is: 'read', doubt: null };
    before = choice;
  }
  bringPastMidnight(placed, said, sequence);
  questionStrays(placed, said, { zone, span, order, is24 });

  before = null;
  for (const i of sequence) {
    const known = placed[i];
    if (known) before = known.at;
    else if (before !== null) placed[i] = estimate(before);
  }
  before = null;
  for (const i of [...sequence].reverse()) {
    const known = placed[i];
    if (known) before = known.at;
    else placed[i] = estimate(before ?? span.from);
  }
  return placed.map((one) => one ?? estimate(span.from));
}

/** Whether "3/4" is a day in March or in April: whichever lies in the night. */
export function dateOrder(
  dates: readonly (DateSaid | null)[],
  zone: ZoneClock,
  span: NightSpan,
): DateOrder {
  let monthFirst = 0;
  let dayFirst = 0;
  for (const date of dates) {
    if (date?.kind !== 'either') continue;
    const inNight = (order: DateOrder): boolean =>
      daysOf(date, zone, span, order).some((day) => isNear(day, zone, span));
    if (inNight('month-first')) monthFirst++;
    if (inNight('day-first')) dayFirst++;
  }
  return dayFirst > monthFirst ? 'day-first' : 'month-first';
}

/** The calendar days that a date as written may mean, likeliest first. */
export function daysOf(
  date: DateSaid,
  zone: ZoneClock,
  span: NightSpan,
  order: DateOrder,
  base?: LocalDate,
): readonly LocalDate[] {
  if (date.kind === 'relative') {
    return [addDays(base ?? zone.toLocal(span.from), date.days)];
  }
  if (date.kind === 'weekday') {
    const start = addDays(zone.toLocal(span.from), -1);
    const count = Math.min(10, Math.ceil((span.to - span.from) / (24 * HOUR_MS)) + 3);
    return Array.from({ length: Math.max(count, 8) }, (_, i) => addDays(start, i)).filter(
      (day) => new Date(Date.UTC(day.year, day.month - 1, day.day)).getUTCDay() === date.weekday,
    );
  }
  const month =
    date.kind === 'full' ? date.month : order === 'month-first' ? date.first : date.second;
  const day = date.kind === 'full' ? date.day : order === 'month-first' ? date.second : date.first;
  if (date.year !== null) return [{ year: date.year, month, day }];
  const year = zone.toLocal(span.from).year;
  return [year - 1, year, year + 1]
    .map((candidate) => ({ year: candidate, month, day }))
    .sort((a, b) => distance(a, zone, span) - distance(b, zone, span))
    .slice(0, 1);
}

/** The wall-clock times that a clock as written may mean. */
export function timesOf(
  clock: ClockSaid,
  is24: boolean,
): readonly { hour: number; minute: number; likely: boolean }[] {
  const { minute } = clock;
  if (clock.half === 'known') return [{ hour: clock.hour, minute, likely: true }];
  if (is24) return [{ hour: clock.hour, minute, likely: true }];
  const hour = clock.hour % 12;
  const asWritten = clock.style === 'padded';
  return [
    { hour, minute, likely: true },
    { hour: hour + 12, minute, likely: !asWritten || clock.hour === 12 },
  ];
}

export function addDays(day: LocalDate, days: number): LocalDate {
  const at = new Date(Date.UTC(day.year, day.month - 1, day.day + days));
  return { year: at.getUTCFullYear(), month: at.getUTCMonth() + 1, day: at.getUTCDate() };
}

interface Setting {
  readonly zone: ZoneClock;
  readonly span: NightSpan;
  readonly order: DateOrder;
  readonly is24: boolean;
}

interface Option {
  readonly at: Instant;
  readonly likely: boolean;
}

function optionsOf({ when, dayAbove }: ReceivedSaid, setting: Setting): readonly Option[] {
  if (!when) return [];
  if (when.instant !== null) return [{ at: when.instant, likely: true }];
  if (!when.clock) return [];
  const { zone, span, order, is24 } = setting;
  const said = when.date ?? dayAbove;
  let days: readonly LocalDate[];
  if (when.date) days = daysOf(when.date, zone, span, order);
  else if (said) days = daysAround(said, when.clock, setting);
  else days = daysBetween(zone, span);
  const times = timesOf(when.clock, is24);
  return days
    .flatMap((day) =>
      times.map(({ hour, minute, likely }) => ({
        at: zone.toInstant({ ...day, hour, minute }),
        likely,
      })),
    )
    .sort((a, b) => a.at - b.at);
}

/**
 * The day that stands above a row, or the next, since a night has two. A report that is dated the
 * morning after means the evening before.
 */
function daysAround(said: DateSaid, clock: ClockSaid, setting: Setting): readonly LocalDate[] {
  const { zone, span, order, is24 } = setting;
  const days = daysOf(said, zone, span, order).flatMap((day) => [day, addDays(day, 1)]);
  const fits = days.some((day) =>
    timesOf(clock, is24).some(({ hour, minute }) => {
      const at = zone.toInstant({ ...day, hour, minute });
      return at >= span.from - SLACK_MS && at <= span.to + SLACK_MS;
    }),
  );
  const [first] = days;
  return fits || !first ? days : [addDays(first, -1), ...days];
}

function daysBetween(zone: ZoneClock, span: NightSpan): LocalDate[] {
  const first = addDays(zone.toLocal(span.from), -1);
  const count = Math.min(16, Math.ceil((span.to - span.from) / (24 * HOUR_MS)) + 3);
  return Array.from({ length: count }, (_, i) => addDays(first, i));
}

function choose(
  options: readonly Option[],
  before: Instant | null,
  span: NightSpan,
): Instant | null {
  if (options.length === 0) return null;
  const inNight = options.filter(
    ({ at }) => at >= span.from - SLACK_MS && at <= span.to + SLACK_MS,
  );
  const pool = inNight.length > 0 ? inNight : options;
  const cost = ({ at, likely }: Option): number => {
    const unlikely = likely ? 0 : 6 * HOUR_MS;
    if (before !== null)
      return unlikely + (at >= before ? at - before : BACK_COSTS * (before - at));
    if (inNight.length > 0) return unlikely + (at - span.from + SLACK_MS);
    return unlikely + Math.abs(at - span.from);
  };
  return pool.reduce((best, option) => (cost(option) < cost(best) ? option : best)).at;
}

/** Newest first? Judged by the small steps, since midnight makes a large one either way. */
function runsBackwards(options: readonly (readonly Option[])[]): boolean {
  let forward = 0;
  let backward = 0;
  let before: Instant | null = null;
  for (const choices of options) {
    const [first] = choices;
    if (!first) continue;
    if (before !== null) {
      const half = choices.length > 1 ? 12 : 24;
      let step = (first.at - before) % (half * HOUR_MS);
      if (step > (half / 2) * HOUR_MS) step -= half * HOUR_MS;
      if (step < -(half / 2) * HOUR_MS) step += half * HOUR_MS;
      if (step > 0) forward++;
      if (step < 0) backward++;
    }
    before = first.at;
  }
  return backward > forward;
}

/**
 * A service that writes the date on which the shift began keeps writing it after midnight. Such a log
 * falls back by most of a day once and otherwise only rises.
 */
function bringPastMidnight(
  placed: (Received | null)[],
  said: readonly ReceivedSaid[],
  sequence: readonly number[],
): void {
  const dated = sequence.filter((i) => said[i]?.when?.date && said[i].when.clock && placed[i]);
  const days = new Set(dated.map((i) => JSON.stringify(said[i]?.when?.date)));
  if (days.size !== 1 || dated.length < 4) return;
  let fallAt = -1;
  let falls = 0;
  for (let n = 1; n < dated.length; n++) {
    const step = (placed[dated[n] ?? 0]?.at ?? 0) - (placed[dated[n - 1] ?? 0]?.at ?? 0);
    if (step < -12 * HOUR_MS) {
      falls++;
      fallAt = n;
    }
  }
  if (falls !== 1) return;
  for (const i of dated.slice(fallAt)) {
    const one = placed[i];
    if (one) placed[i] = { ...one, at: one.at + 24 * HOUR_MS };
  }
}

/** A date far outside the night of an otherwise fitting log is a slip of the pen. */
function questionStrays(
  placed: (Received | null)[],
  said: readonly ReceivedSaid[],
  setting: Setting,
): void {
  const isStray = (one: Received | null): boolean =>
    one !== null && (one.at < setting.span.from - FAR_MS || one.at > setting.span.to + FAR_MS);
  const strays = placed.filter(isStray).length;
  if (strays === 0 || strays > placed.length / 4) return;
  for (let i = 0; i < placed.length; i++) {
    const one = placed[i] ?? null;
    const when = said[i]?.when;
    if (!one || !when || !isStray(one)) continue;
    const near =
      placed
        .slice(0, i)
        .reverse()
        .find((other) => other && !isStray(other)) ??
      placed.slice(i).find((other) => other && !isStray(other));
    const undated = optionsOf(
      { when: { ...when, date: null, instant: null }, dayAbove: null },
      setting,
    );
    const at = choose(undated, near?.at ?? null, setting.span) ?? near?.at ?? setting.span.from;
    placed[i] = {
      at,
      is: 'estimated',
      doubt: 'the date in the row is not of this night; the night of the rows around it was taken',
    };
  }
}

const estimate = (at: Instant): Received => ({
  at,
  is: 'estimated',
  doubt: 'no time could be read in the row; that of the rows around it was taken',
});

function distance(day: LocalDate, zone: ZoneClock, span: NightSpan): number {
  const noon = zone.toInstant({ ...day, hour: 12, minute: 0 });
  return noon < span.from ? span.from - noon : noon > span.to ? noon - span.to : 0;
}

const isNear = (day: LocalDate, zone: ZoneClock, span: NightSpan): boolean =>
  distance(day, zone, span) <= FAR_MS;
