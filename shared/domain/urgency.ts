import type { CompartmentFacts, CompartmentKind, CoolingLoss } from './cold-unit';
import { MINUTE_MS, type Instant } from './instant';
import { compartmentState, savedBy, type ThawClock } from './thaw/thaw-clock';

/**
 * Who can still help:
 * 1. medicine is at risk: phone first;
 * 2. fresh food or stock can be saved by phone advice and ice;
 * 3. only a visit saves what is left (a freezer, or medicine that keeps for a while);
 * 4. nothing is left to save: an ordinary repair.
 */
export type Lane = 1 | 2 | 3 | 4;

/** What the urgency needs of a compartment; a board has no more than this. */
export interface CompartmentOnClock {
  readonly facts: Pick<CompartmentFacts, 'kind' | 'valueCents'>;
  readonly clock: Pick<ThawClock, 'atRiskAt' | 'saveByAt' | 'recoveredAt'>;
}

/** What is lost per minute if a call waits. */
export interface Urgency {
  readonly lane: Lane;
  /**
   * US cents per minute: the value of each live compartment spread over the minutes it has left.
   * Our estimate; contents are lost at a moment and not little by little, so it serves to compare
   * calls and not to bill anyone.
   */
  readonly lossPerMinuteCents: number;
  /** Minutes until the next save-by of a live compartment; null when there is none. */
  readonly slackMinutes: number | null;
  readonly saveByAt: Instant | null;
  /** When the first live compartment counts as at risk, past or to come. */
  readonly atRiskAt: Instant | null;
  /** What can still be saved, US cents, medicine unweighted. */
  readonly valueAtRiskCents: number;
  /** In words, what decides the call's place first. */
  readonly reasons: readonly string[];
}

export interface UrgencyWeights {
  /** How much more a minute of medicine counts than a minute of food of the same price. */
  readonly medicine: number;
}

/** Our estimate: a lost dose costs more than its price, and the queue must show that. */
export const DEFAULT_WEIGHTS: UrgencyWeights = { medicine: 5 };

/**
 * The least time over which a value is spread, in minutes. Our estimate: one phone call. Without it
 * the last seconds of a compartment that nobody can reach any more would outrank everything.
 */
const LEAST_MINUTES = 10;

/** Over how long medicine without a save-by is spread: "a day or more, replace" (HHS/CDC). */
const UNDATED_MINUTES = 24 * 60;

/**
 * The urgency of one call. Cheap on purpose (one pass over the compartments, clocks already made), so
 * that a board can ask again for thousands of calls every minute.
 *
 * A compartment past its save-by, without value, or cooling again gives none. Medicine counts
 * whatever its price.
 */
export function urgency(
  compartments: readonly CompartmentOnClock[],
  loss: CoolingLoss,
  now: Instant,
  weights: UrgencyWeights = DEFAULT_WEIGHTS,
): Urgency {
  let lane: Lane = 4;
  let lossPerMinuteCents = 0;
  let saveByAt = Infinity;
  let atRiskAt = Infinity;
  let valueAtRiskCents = 0;
  const reasons: Reason[] = [];

  for (const compartment of compartments) {
    if (!isLive(compartment, loss, now)) continue;
    const { facts, clock } = compartment;
    const leftMinutes = clock.saveByAt === null ? null : (clock.saveByAt - now) / MINUTE_MS;
    const spreadMinutes = Math.max(LEAST_MINUTES, leftMinutes ?? UNDATED_MINUTES);
    const weight = facts.kind === 'medicine' ? weights.medicine : 1;
    const ownLane = laneOf(compartment, now);
    const ownLoss = (weight * facts.valueCents) / spreadMinutes;

    lane = Math.min(lane, ownLane) as Lane;
    lossPerMinuteCents += ownLoss;
    valueAtRiskCents += facts.valueCents;
    saveByAt = Math.min(saveByAt, clock.saveByAt ?? Infinity);
    atRiskAt = Math.min(atRiskAt, clock.atRiskAt);
    const words = reasonOf(facts, leftMinutes, now >= clock.atRiskAt);
    reasons.push({ lane: ownLane, lossPerMinuteCents: ownLoss, words });
  }
  reasons.sort((a, b) => a.lane - b.lane || b.lossPerMinuteCents - a.lossPerMinuteCents);

  return {
    lane,
    lossPerMinuteCents,
    slackMinutes: saveByAt === Infinity ? null : (saveByAt - now) / MINUTE_MS,
    saveByAt: saveByAt === Infinity ? null : saveByAt,
    atRiskAt: atRiskAt === Infinity ? null : atRiskAt,
    valueAtRiskCents,
    reasons:
      reasons.length > 0
        ? reasons.map(({ words }) => words)
        : ['Nothing left to save: an ordinary repair'],
  };
}

/** What one compartment adds, in the order in which it is told. */
interface Reason {
  readonly lane: Lane;
  readonly lossPerMinuteCents: number;
  readonly words: string;
}

/** The order of the queue: lane, then what is lost per minute, then what comes due first. */
export function byUrgency(a: Urgency, b: Urgency): number {
  return (
    a.lane - b.lane ||
    b.lossPerMinuteCents - a.lossPerMinuteCents ||
    earlierFirst(a.saveByAt, b.saveByAt) ||
    earlierFirst(a.atRiskAt, b.atRiskAt)
  );
}

/**
 * What a visit that has cooling running again at `finishAt` saves, in US cents. Zero is a fact for the
 * dispatcher to see: phone advice or ice must do it, or nothing can.
 */
export function savableBy(
  compartments: readonly CompartmentOnClock[],
  loss: CoolingLoss,
  finishAt: Instant,
): number {
  // What cooling already saved, no visit saves again.
  if (loss.restoredAt !== null && loss.restoredAt <= finishAt) return 0;
  return compartments.reduce(
    (cents, { facts, clock }) => cents + (savedBy(clock, finishAt) ? facts.valueCents : 0),
    0,
  );
}

function isLive({ facts, clock }: CompartmentOnClock, loss: CoolingLoss, now: Instant): boolean {
  if (loss.restoredAt !== null && loss.restoredAt <= now) return false;
  if (compartmentState(clock, loss, now) === 'lost') return false;
  return facts.kind === 'medicine' || facts.valueCents > 0;
}

function laneOf({ facts, clock }: CompartmentOnClock, now: Instant): Lane {
  switch (facts.kind) {
    case 'medicine':
      return now >= clock.atRiskAt ? 1 : 3;
    case 'fresh-food':
    case 'commercial-stock':
      return 2;
    case 'freezer':
      return 3;
  }
}

const NAMES: Readonly<Record<CompartmentKind, string>> = {
  'fresh-food': 'Fresh food',
  freezer: 'Freezer',
  medicine: 'Medicine',
  'commercial-stock': 'Stock',
};

function reasonOf(
  facts: CompartmentOnClock['facts'],
  left: number | null,
  isAtRisk: boolean,
): string {
  const time = left === null ? 'set apart, ask the pharmacist' : `${minutesInWords(left)} left`;
  const value = `$${Math.round(facts.valueCents / 100)}`;
  return `${NAMES[facts.kind]}${isAtRisk ? ' at risk' : ''}: ${time}, ${value}`;
}

/** '25 min', '1 h 05 min', '42 h', '27 days'; rounded down, so that nobody counts on more. */
export function minutesInWords(minutes: number): string {
  const whole = Math.max(0, Math.floor(minutes));
  const hours = Math.floor(whole / 60);
  if (hours >= 72) return `${Math.floor(hours / 24)} days`;
  if (hours >= 10) return `${hours} h`;
  if (hours === 0) return `${whole} min`;
  const rest = whole % 60;
  return rest === 0 ? `${hours} h` : `${hours} h ${String(rest).padStart(2, '0')} min`;
}

const earlierFirst = (a: Instant | null, b: Instant | null): number =>
  a === b ? 0 : (a ?? Infinity) - (b ?? Infinity);
