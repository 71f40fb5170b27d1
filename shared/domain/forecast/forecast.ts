import { HOUR_MS, MINUTE_MS, type Instant } from '../instant';
import { drawHabits } from './area-rings';
import { bandOf, momentBandOf, type Band } from './band';
import { crewOf, type CrewChange } from './crew-change';
import { Draws } from './draws';
import type { AtStake, ForecastFacts } from './facts';
import { drawOtherRings } from './other-rings';
import { play } from './play';
import { handfulFor, type Crew, type Played, type Span } from './played';
import { RingClock } from './ring-clock';
import { drawWorld, type World } from './world';

export interface Outlook {
  /** When the backlog is empty; null where that lies beyond what is looked at. */
  readonly emptyAt: Band<Instant | null>;
  /** Of all futures, the share in which it becomes empty before `until`. */
  readonly emptyShare: number;
  /** How far it was looked ahead. */
  readonly until: Instant;
  readonly curve: readonly { readonly at: Instant; readonly open: Band }[];
  /** What is lost from now on, of open calls and of those to come, until it is empty. */
  readonly lostCents: Band;
  /** Households whose medicine is lost from now on. */
  readonly medicineLost: Band;
  /** Calls still to come until it is empty. */
  readonly arrivals: Band;
  /** Of how many futures this is the summary. */
  readonly futures: number;
}

/** How much a change moves each figure, future by future; below zero is sooner and less. */
export interface Difference {
  /** Hours; a future that is not empty in time counts as empty at its end. */
  readonly emptyHours: Band;
  readonly lostCents: Band;
  readonly medicineLost: Band;
  /** Calls open at the end of what is looked at. */
  readonly openAtEnd: Band;
  /** Of all futures, the share in which the backlog is empty sooner by a quarter of an hour and more. */
  readonly soonerShare: number;
}

/** What the next hours bring to the phones. */
export interface PhoneAhead {
  /** Calls in the busiest hour. */
  readonly callsPerHour: Band;
  readonly handleMinutes: Band;
}

export interface Forecast {
  readonly asItIs: Outlook;
  readonly phone: PhoneAhead;
  /** Both null when no change was asked about. */
  readonly changed: Outlook | null;
  readonly difference: Difference | null;
}

export interface ForecastOptions {
  readonly seed: number;
  /** How many futures; left out, as many as the size of the storm lets one play within seconds. */
  readonly futures?: number;
  readonly change?: CrewChange;
  /** Asked before every future; true ends the work with an error. */
  readonly shouldStop?: () => boolean;
}

/** How far one looks ahead at most and at least. */
const FARTHEST_MS = 8 * 24 * HOUR_MS;
const LEAST_MS = 36 * HOUR_MS;
/** After the last shift that anybody has entered, nothing is known of who works. */
const AFTER_SHIFTS_MS = 2 * HOUR_MS;
const STEP_MS = 30 * MINUTE_MS;
const MOST_FUTURES = 250;
const LEAST_FUTURES = 60;
/** Calls to play in all, by measurement about a second of one core. */
const CALLS_IN_ALL = 120_000;

/** The work was given up because nobody wants its answer any more. */
export class ForecastStopped extends Error {
  constructor() {
    super('The forecast was stopped.');
    this.name = 'ForecastStopped';
  }
}

/**
 * Plays many possible futures from the present state of a storm, each with rates, shares and times of
 * its own that agree with what was seen, and sums them up. A change of the crew is played in the same
 * futures, so that the difference is the change's own and not luck's.
 */
export function forecast(facts: ForecastFacts, options: ForecastOptions): Forecast {
  const draws = new Draws(options.seed);
  const clock = new RingClock(facts.zoneOffsetMs);
  const base = crewOf(facts);
  const change = options.change ? crewOf(facts, options.change) : null;
  const span = spanOf(facts, [base, ...(change ? [change] : [])]);
  const futures = options.futures ?? futuresFor(facts.calls.length);
  const habits = drawHabits(draws, facts.areas, facts.now, clock, futures);
  const others = drawOtherRings(draws, facts.otherRingsAt, facts.since, facts.now, clock, futures);

  const busiest: number[] = [];
  const handleMinutes: number[] = [];
  const asItIs: Played[] = [];
  const changed: Played[] = [];
  for (let i = 0; i < futures; i++) {
    if (options.shouldStop?.()) throw new ForecastStopped();
    // A stream of its own for each future: how many draws one takes moves no other.
    const own = new Draws(options.seed * 7919 + i + 1);
    const world = drawWorld(facts, own, habits[i]!, others[i]!, span.until, clock);
    busiest.push(busiestHour(world, facts.now));
    handleMinutes.push(world.handleMs / MINUTE_MS);
    asItIs.push(play(facts.calls, world, base, span));
    if (change) changed.push(play(facts.calls, world, change, span));
  }
  const doomed = (played: readonly Played[]) =>
    played.map((one) => withDoomed(one, facts.stillToLose));
  const [before, after] = [doomed(asItIs), doomed(changed)];
  return {
    asItIs: outlookOf(before, span),
    phone: { callsPerHour: bandOf(busiest), handleMinutes: bandOf(handleMinutes) },
    changed: change ? outlookOf(after, span) : null,
    difference: change ? differenceOf(before, after, span) : null,
  };
}

/** How many hours one looks ahead for those on the phones: a night and a morning. */
const PHONE_HOURS = 12;

/** Calls in the busiest of the next hours. */
function busiestHour({ calls }: World, now: Instant): number {
  const hours = new Float64Array(PHONE_HOURS);
  for (let i = calls.open; i < calls.length; i++) {
    const hour = Math.floor((calls.at[i]! - now) / HOUR_MS);
    if (hour < PHONE_HOURS) hours[hour]!++;
  }
  return Math.max(...hours);
}

const futuresFor = (open: number): number =>
  Math.min(MOST_FUTURES, Math.max(LEAST_FUTURES, Math.round(CALLS_IN_ALL / (open + 100))));

function spanOf({ now, technicians }: ForecastFacts, crews: readonly Crew[]): Span {
  const lastEnd = crews
    .flatMap((crew) => crew.technicians.flatMap(({ shifts }) => shifts.at(-1)?.endsAt ?? now))
    .reduce((most, at) => Math.max(most, at), now);
  const ahead = Math.min(FARTHEST_MS, Math.max(LEAST_MS, lastEnd + AFTER_SHIFTS_MS - now));
  const working = technicians.filter(({ shifts }) => shifts.length > 0).length;
  return { now, until: now + ahead, stepMs: STEP_MS, handful: handfulFor(working) };
}

/** Contents of settled calls whose cooling nobody brings back are lost, sooner or later. */
function withDoomed(played: Played, doomed: readonly (readonly AtStake[])[]): Played {
  let { lostCents, medicineLost } = played;
  for (const compartments of doomed) {
    const lost = compartments.filter(({ saveByAt }) => saveByAt !== null);
    lostCents += lost.reduce((sum, { valueCents }) => sum + valueCents, 0);
    if (lost.some(({ isMedicine }) => isMedicine)) medicineLost++;
  }
  return { ...played, lostCents, medicineLost };
}

function outlookOf(played: readonly Played[], { now, until, stepMs }: Span): Outlook {
  const emptyAt = momentBandOf(played.map((one) => one.emptyAt));
  // Where nine of ten futures are done the picture is at its end.
  const end = emptyAt.high ?? until;
  const points = Math.min(played[0]?.open.length ?? 0, Math.ceil((end - now) / stepMs) + 1);
  const curve = Array.from({ length: points }, (_, i) => ({
    at: now + i * stepMs,
    open: bandOf(played.map((one) => one.open[i]!)),
  }));
  return {
    emptyAt,
    emptyShare: played.filter((one) => one.emptyAt <= until).length / Math.max(1, played.length),
    until,
    curve,
    lostCents: bandOf(played.map(({ lostCents }) => lostCents)),
    medicineLost: bandOf(played.map(({ medicineLost }) => medicineLost)),
    arrivals: bandOf(played.map(({ arrivals }) => arrivals)),
    futures: played.length,
  };
}

const SOONER_HOURS = 0.25;

function differenceOf(
  before: readonly Played[],
  after: readonly Played[],
  { until }: Span,
): Difference {
  const each = (value: (played: Played) => number): number[] =>
    after.map((one, i) => value(one) - value(before[i]!));
  const hours = each(({ emptyAt }) => Math.min(emptyAt, until) / HOUR_MS);
  return {
    emptyHours: bandOf(hours),
    lostCents: bandOf(each(({ lostCents }) => lostCents)),
    medicineLost: bandOf(each(({ medicineLost }) => medicineLost)),
    openAtEnd: bandOf(each(({ open }) => open.at(-1) ?? 0)),
    soonerShare: hours.filter((one) => one <= -SOONER_HOURS).length / Math.max(1, hours.length),
  };
}
