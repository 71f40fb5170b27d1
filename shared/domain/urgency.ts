import type { CompartmentFacts, CompartmentKind, CoolingLoss } from './cold-unit';
import { MINUTE_MS, type Instant } from './instant';
import { lossRate } from './loss-rate';
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
  readonly clock: Pick<
    ThawClock,
    'atRiskAt' | 'earliestAt' | 'likelyAt' | 'saveByAt' | 'recoveredAt'
  >;
}

/** What is lost per minute if a call waits. */
export interface Urgency {
  readonly lane: Lane;
  /**
   * US cents per minute: for each live compartment its weighed value, times the share of it that is lost
   * per minute around the moment when somebody could help. Our estimate; contents are lost at a
   * moment and not little by little, so it serves to compare calls and not to bill anyone.
   */
  readonly lossPerMinuteCents: number;
  /** Minutes until the next save-by of a live compartment; null when there is none. */
  readonly slackMinutes: number | null;
  readonly saveByAt: Instant | null;
  /** When the first live compartment counts as at risk, past or to come. */
  readonly atRiskAt: Instant | null;
  /** What can still be saved, US cents, unweighted. */
  readonly valueAtRiskCents: number;
  /** In words, what decides the call's place first. */
  readonly reasons: readonly string[];
}

export interface UrgencyWeights {
  /** How much more a minute of medicine counts than a minute of food of the same price. */
  readonly medicine: number;
  /** How much more everything counts in a household that can do less without. */
  readonly household: number;
}

/**
 * Our estimates: a lost dose costs more than its price, as does food where somebody can do less without
 * it, and the queue must show that.
 */
export const DEFAULT_WEIGHTS: UrgencyWeights = { medicine: 5, household: 1.5 };

/** Our estimate until a manager says otherwise: the rest of the stop before, and the drive. */
export const DEFAULT_REACH_MINUTES = 60;

/** The moment around which a call is weighed. */
export interface UrgencySetting {
  readonly weights: UrgencyWeights;
  /** When a visit could be at the door. What phone advice or ice saves is weighed at once. */
  readonly couldBeThere: Instant;
  readonly householdAtRisk: boolean;
}

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
  {
    weights = DEFAULT_WEIGHTS,
    couldBeThere = now + DEFAULT_REACH_MINUTES * MINUTE_MS,
    householdAtRisk = false,
  }: Partial<UrgencySetting> = {},
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
    const ownLane = laneOf(compartment, now);
    // Phone advice and ice save the rest at once; only a visit makes a freezer cold again.
    const helpAt = facts.kind === 'freezer' ? Math.max(now, couldBeThere) : now;
    const weight =
      (facts.kind === 'medicine' ? weights.medicine : 1) *
      (householdAtRisk ? weights.household : 1);
    const ownLoss = weight * facts.valueCents * rateOf(clock, helpAt);

    lane = Math.min(lane, ownLane) as Lane;
    lossPerMinuteCents += ownLoss;
    valueAtRiskCents += facts.valueCents;
    saveByAt = Math.min(saveByAt, clock.saveByAt ?? Infinity);
    atRiskAt = Math.min(atRiskAt, clock.atRiskAt);
    const words = reasonOf(compartment, now, helpAt);
    reasons.push({ lane: ownLane, lossPerMinuteCents: ownLoss, words });
  }
  reasons.sort((a, b) => a.lane - b.lane || b.lossPerMinuteCents - a.lossPerMinuteCents);
  const words = reasons.map((reason) => reason.words);
  if (householdAtRisk && words.length > 0) words.push('A household that can do less without');

  return {
    lane,
    lossPerMinuteCents,
    slackMinutes: saveByAt === Infinity ? null : (saveByAt - now) / MINUTE_MS,
    saveByAt: saveByAt === Infinity ? null : saveByAt,
    atRiskAt: atRiskAt === Infinity ? null : atRiskAt,
    valueAtRiskCents,
    reasons: words.length > 0 ? words : ['Nothing left to save: an ordinary repair'],
  };
}

function rateOf(clock: CompartmentOnClock['clock'], at: Instant): number {
  const { earliestAt, likelyAt, saveByAt } = clock;
  return saveByAt === null || likelyAt === null
    ? 1 / UNDATED_MINUTES
    : lossRate({ earliestAt, likelyAt, saveByAt }, at);
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

/** Below this many minutes two moments are told as one. */
const TOLD_APART_MINUTES = 15;

function reasonOf({ facts, clock }: CompartmentOnClock, now: Instant, helpAt: Instant): string {
  const name = `${NAMES[facts.kind]}${now >= clock.atRiskAt ? ' at risk' : ''}`;
  return `${name}: ${timeWords(clock, now, helpAt)}, $${Math.round(facts.valueCents / 100)}`;
}

function timeWords(
  { likelyAt, saveByAt }: CompartmentOnClock['clock'],
  now: Instant,
  helpAt: Instant,
): string {
  if (saveByAt === null) return 'set apart, ask the pharmacist';
  const left = minutesInWords((saveByAt - now) / MINUTE_MS);
  const likely = ((likelyAt ?? saveByAt) - now) / MINUTE_MS;
  const isTold = saveByAt - (likelyAt ?? saveByAt) >= TOLD_APART_MINUTES * MINUTE_MS;
  const words = !isTold
    ? `${left} left`
    : likely <= 0
      ? `likely warm already, ${left} left to the limit`
      : `likely ${minutesInWords(likely)} left, ${left} to the limit`;
  // A visit that comes too late is a fact for the dispatcher, not a lower number.
  return helpAt >= saveByAt ? `${words}, no visit could be there before` : words;
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
