import type { FactsInHours } from './facts-in-hours';
import { CONSUMER_LIMIT_F } from './warming';

/**
 * Hours that food may have been above 40 F before it is discarded.
 * Source: USDA food-safety FAQ and FSIS; FoodSafety.gov chart "held above 40 F for more than 2
 * hours". A newer consumer wording of 4 h is more permissive and is not used.
 */
export const ABOVE_LIMIT_HOURS = 2;

/** The contents were found above 40 F. */
export interface WarmFinding {
  readonly hours: number;
  /** The last moment at which they were known at or under 40 F: warm from then, at worst. */
  readonly coldUntilHours: number;
}

/**
 * Every moment at which a household's food was found warm, in order.
 *
 * Without an earlier cold reading the food counts as warm from the loss. A warm reading from before
 * the loss counts from that reading, unless a cold one followed while the unit still ran.
 * Looking inside counts as a reading: crystals or "at or below 40 F" are cold, "thawed" is warm.
 */
export function warmFindings(facts: FactsInHours): readonly WarmFinding[] {
  const record = [
    ...facts.readings.map(({ hours, temperatureF }) => ({
      hours,
      isCold: temperatureF <= CONSUMER_LIMIT_F,
    })),
    ...facts.inspections.map(({ hours, finding }) => ({ hours, isCold: finding !== 'thawed' })),
  ].sort((a, b) => a.hours - b.hours || Number(b.isCold) - Number(a.isCold));

  const findings: WarmFinding[] = [];
  let coldUntilHours = 0;
  for (const { hours, isCold } of record) {
    if (isCold) {
      if (hours <= 0) findings.length = 0;
      coldUntilHours = Math.max(coldUntilHours, hours);
    } else {
      findings.push({ hours, coldUntilHours: Math.min(coldUntilHours, hours) });
    }
  }
  return findings;
}

/** The findings that show more than two hours above 40 F. */
export const overruns = (findings: readonly WarmFinding[]): readonly number[] =>
  findings
    .filter(({ hours, coldUntilHours }) => hours >= coldUntilHours + ABOVE_LIMIT_HOURS)
    .map(({ hours }) => hours);
