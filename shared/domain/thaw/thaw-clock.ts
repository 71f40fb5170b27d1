import type { CompartmentFacts, CompartmentKind, CoolingLoss, UnitOnClock } from '../cold-unit';
import { addHours, hoursBetween, type Instant } from '../instant';
import type { AdviceKey } from './advice';
import { COMMERCIAL_LIMIT_F, commercialStockHours, NOTICE_HOURS } from './commercial-stock';
import { factsInHours, type ClockHours, type FactsInHours } from './facts-in-hours';
import { freezerHours } from './freezer';
import { freshFoodHours } from './fresh-food';
import { medicineHours } from './medicine';
import { inOrder } from './uncooled-time';
import { CONSUMER_LIMIT_F, THAW_F } from './warming';

export const COMPARTMENT_STATES = ['still-safe', 'at-risk', 'lost', 'recovering'] as const;
export type CompartmentState = (typeof COMPARTMENT_STATES)[number];

/** When a compartment's contents come to be at risk and when they are lost. */
export interface ThawClock {
  /** From here nobody can assume any more that the contents are cold. Never after `saveByAt`. */
  readonly atRiskAt: Instant;
  /**
   * From here the contents are lost, unless cooling came back before. `null`: no rule here may call
   * them lost (vaccines and injectable biologics).
   */
  readonly saveByAt: Instant | null;
  /**
   * How surely they keep until then: from when they may have passed their temperature, and from when
   * they likely have, by measured warming. Our estimates; never after `saveByAt`.
   */
  readonly earliestAt: Instant;
  /** `null` with `saveByAt`. */
  readonly likelyAt: Instant | null;
  /** In plain words, each with the name of its source. */
  readonly reasons: readonly string[];
  readonly advice: AdviceKey;
  /** How "lost" is said. Medicine is never called lost, only to be replaced. */
  readonly lostWord: 'Lost' | 'Replace';
  /** From here some health authorities ask a kitchen to stop and tell them; local rules differ. */
  readonly noticeAt: Instant | null;
  /** When a thermometer or a look inside proved that the contents were cold again. */
  readonly recoveredAt: Instant | null;
}

const UNKNOWN_UNIT: UnitOnClock = { cubicFeet: null, cooling: 'unknown' };

/**
 * The clock of one compartment. It depends on what is known and not on the time of day, so it is
 * worked out once whenever the facts change.
 *
 * Hours without cooling are added up over every time that the unit stopped. Only where a thermometer or
 * a look inside proved the contents cold again while it ran in between does the clock begin anew.
 */
export function thawClock(
  told: CompartmentFacts,
  toldLoss: CoolingLoss,
  unit: UnitOnClock = UNKNOWN_UNIT,
): ThawClock {
  const { facts, loss } = sinceLastProof(told, toldLoss, unit);
  const recoveredAt = recoveryProof(facts, loss);
  const hours = CLOCKS[facts.kind](factsInHours(facts, loss, unit, recoveredAt));
  const lostHours = lostHoursOf(hours, loss);
  const within = (moment: number): number => Math.min(moment, lostHours ?? Infinity);
  return {
    atRiskAt: momentAfter(loss, within(hours.atRiskHours)),
    saveByAt: lostHours === null ? null : momentAfter(loss, lostHours),
    earliestAt: momentAfter(loss, within(hours.earliestHours)),
    likelyAt: hours.likelyHours === null ? null : momentAfter(loss, within(hours.likelyHours)),
    reasons: [...hours.reasons, ...runReasons(toldLoss, loss)],
    advice: hours.advice,
    lostWord: facts.kind === 'medicine' ? 'Replace' : 'Lost',
    noticeAt: facts.kind === 'commercial-stock' ? addHours(loss.lostAt, NOTICE_HOURS) : null,
    recoveredAt: lostHours === null ? null : recoveredAt,
  };
}

/**
 * What the contents are at a moment. Equality is the worse state: "no more than 4 hours" is less than
 * four hours. Once cooling is back the clock stands still.
 */
export function compartmentState(
  clock: Pick<ThawClock, 'atRiskAt' | 'saveByAt' | 'recoveredAt'>,
  loss: CoolingLoss,
  now: Instant,
): CompartmentState {
  const { atRiskAt, saveByAt, recoveredAt } = clock;
  const isCooling = loss.restoredAt !== null && loss.restoredAt <= now;
  // Cooling does not answer for what a vaccine went through: it stays set apart.
  if (isCooling && saveByAt !== null) {
    if (!savedBy(clock, loss.restoredAt)) return 'lost';
    return recoveredAt !== null && recoveredAt <= now ? 'still-safe' : 'recovering';
  }
  if (saveByAt !== null && now >= saveByAt) return 'lost';
  return now >= atRiskAt ? 'at-risk' : 'still-safe';
}

/** Whether contents count as saved when cooling comes back at this moment. */
export const savedBy = (clock: Pick<ThawClock, 'saveByAt'>, restoredAt: Instant): boolean =>
  clock.saveByAt === null || restoredAt < clock.saveByAt;

/** How a state is said on a screen; it names a published limit and never says "safe to eat". */
export function stateInWords(clock: ThawClock, state: CompartmentState): string {
  switch (state) {
    case 'still-safe':
      return 'Within the published limit';
    case 'at-risk':
      return 'At risk';
    case 'recovering':
      return 'Cooling again, not yet proved cold';
    case 'lost':
      return clock.lostWord;
  }
}

const CLOCKS: Readonly<Record<CompartmentKind, (facts: FactsInHours) => ClockHours>> = {
  'fresh-food': freshFoodHours,
  freezer: freezerHours,
  medicine: medicineHours,
  'commercial-stock': commercialStockHours,
};

/**
 * Contents that were measured warm for too long after cooling came back were not saved by it; their
 * save-by is then no later than the restoration.
 */
function lostHoursOf({ lostHours, overrunHours }: ClockHours, loss: CoolingLoss): number | null {
  if (lostHours === null || loss.restoredAt === null) return lostHours;
  const restoredHours = hoursBetween(loss.lostAt, loss.restoredAt);
  const isTooLate = overrunHours.some((hours) => hours > restoredHours);
  return isTooLate ? Math.min(lostHours, restoredHours) : lostHours;
}

/** Whole milliseconds, so that a moment survives the wire and the database unchanged. */
const momentAfter = (loss: CoolingLoss, hours: number): Instant =>
  Math.round(addHours(loss.lostAt, hours));

/** Only food and milk come back from the cold as they were; medicine adds up, a kitchen has its log. */
const mayBeginAnew = ({ kind, medicine }: CompartmentFacts): boolean =>
  kind === 'fresh-food' ||
  kind === 'freezer' ||
  medicine?.kind === 'milk-or-formula' ||
  medicine?.kind === 'frozen-milk';

/**
 * What counts since the contents were last proved cold while the unit ran in between. Contents that
 * were lost before it ran stay lost.
 */
function sinceLastProof(
  facts: CompartmentFacts,
  loss: CoolingLoss,
  unit: UnitOnClock,
): { readonly facts: CompartmentFacts; readonly loss: CoolingLoss } {
  if (!loss.ranSpans?.length || !mayBeginAnew(facts)) return { facts, loss };
  let since = { facts, loss };
  const spans = inOrder(loss.ranSpans, loss.lostAt);
  for (const [i, span] of spans.entries()) {
    const before: CoolingLoss = {
      lostAt: since.loss.lostAt,
      restoredAt: span.from,
      ranSpans: spans.slice(0, i),
    };
    const provedAt = recoveryProof(since.facts, before);
    if (provedAt === null || provedAt >= span.to) continue;
    const clock = thawClock(until(since.facts, provedAt), before, unit);
    if (!savedBy(clock, span.from)) continue;
    const anew = { ...loss, lostAt: span.to, ranSpans: spans.slice(i + 1) };
    since = { facts: from(since.facts, provedAt), loss: anew };
  }
  return since;
}

const until = (facts: CompartmentFacts, last: Instant): CompartmentFacts =>
  having(facts, (at) => at <= last);

const from = (facts: CompartmentFacts, first: Instant): CompartmentFacts =>
  having(facts, (at) => at >= first);

function having(facts: CompartmentFacts, counts: (at: Instant) => boolean): CompartmentFacts {
  const counted = <T extends { readonly at: Instant }>(all: readonly T[]): readonly T[] =>
    all.filter(({ at }) => counts(at));
  const { standingOpenSince } = facts;
  return {
    ...facts,
    readings: counted(facts.readings),
    inspections: counted(facts.inspections),
    dryIce: counted(facts.dryIce),
    ice: counted(facts.ice),
    standingOpenSince:
      standingOpenSince !== null && counts(standingOpenSince) ? standingOpenSince : null,
  };
}

function runReasons(told: CoolingLoss, counted: CoolingLoss): readonly string[] {
  const words: string[] = [];
  if (counted.lostAt !== told.lostAt) {
    words.push('Proved cold while it ran in between: counted from when it stopped again');
  }
  if (inOrder(counted.ranSpans ?? [], counted.lostAt).length > 0) {
    words.push('Ran in between: the hours without cooling are added up (USDA FSIS)');
  }
  return words;
}

/** Source: FDA: medicine is stored at 36-46 F (2-8 C). */
const MEDICINE_LIMIT_F = 46;

/**
 * The first proof after restoration: a thermometer at the compartment's limit, or, for what was
 * frozen, solid (32 F) or ice crystals.
 */
function recoveryProof(facts: CompartmentFacts, loss: CoolingLoss): Instant | null {
  const { restoredAt } = loss;
  if (restoredAt === null) return null;
  const limitF = provenAtF(facts);
  const isFrozen = limitF === THAW_F;
  const proofs = [
    ...facts.readings.filter(({ temperatureF }) => temperatureF <= limitF),
    ...facts.inspections.filter(
      ({ finding }) => finding === 'ice-crystals' || (finding === 'at-or-below-40' && !isFrozen),
    ),
  ].map(({ at }) => at);
  const later = proofs.filter((at) => at >= restoredAt);
  return later.length === 0 ? null : Math.min(...later);
}

function provenAtF({ kind, medicine }: CompartmentFacts): number {
  switch (kind) {
    case 'fresh-food':
      return CONSUMER_LIMIT_F;
    case 'freezer':
      return THAW_F;
    case 'commercial-stock':
      return COMMERCIAL_LIMIT_F;
    case 'medicine':
      if (medicine?.kind === 'frozen-milk') return THAW_F;
      return medicine?.kind === 'milk-or-formula' ? CONSUMER_LIMIT_F : MEDICINE_LIMIT_F;
  }
}
