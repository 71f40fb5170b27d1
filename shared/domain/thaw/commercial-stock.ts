import type { ClockHours, FactsInHours } from './facts-in-hours';

/**
 * Cold holding of food that needs temperature control, degrees F.
 * Source: FDA Food Code 3-501.16(A)(2). One degree above the consumer limit, so kept apart from it.
 */
export const COMMERCIAL_LIMIT_F = 41;

/** Source: FDA Food Code 3-501.19(B), time as a public health control: 4 h from 41 F or less. */
const LIMIT_HOURS = 4;

/**
 * An outage of 2 h or less is not considered hazardous (Washington State DOH; Los Angeles and Marin
 * counties). From here some health authorities ask to stop and be told (South Health District,
 * Georgia, 2018).
 */
export const NOTICE_HOURS = 2;

/** Stock whose temperature at the loss nobody knows. Our estimate: half of the 4 h may be used up. */
const UNKNOWN_START_LIMIT_HOURS = 2;

/**
 * Source: San Francisco Department of Public Health, power-outage table: above 50 F never sold;
 * 46-50 F not sold once 4 h have passed. A fraction above 45 F counts as 46 F.
 */
const NEVER_SOLD_ABOVE_F = 50;
const NOT_SOLD_LATE_ABOVE_F = 45;

/**
 * The clock of a kitchen's stock: it runs on the temperature log, not on hours alone. Each reading at
 * or under 41 F starts the 4 h anew; a reading above 50 F ends them.
 */
export function commercialStockHours(facts: FactsInHours): ClockHours {
  const goodFrom = lastGoodHours(facts, Infinity);
  let atRiskHours = Math.max(0, goodFrom === null ? 0 : goodFrom + NOTICE_HOURS);
  let lostHours = Math.max(
    UNKNOWN_START_LIMIT_HOURS,
    goodFrom === null ? 0 : goodFrom + LIMIT_HOURS,
  );
  const reasons = [startReason(facts, goodFrom)];

  for (const { hours, temperatureF } of relevantReadings(facts)) {
    if (temperatureF <= COMMERCIAL_LIMIT_F) continue;
    const moment = Math.max(0, hours);
    atRiskHours = Math.min(atRiskHours, moment);
    if (isEnd(hours, temperatureF)) {
      lostHours = Math.min(lostHours, moment);
      reasons.push(`Log shows ${temperatureF} F: not to be sold (San Francisco DPH)`);
    } else {
      reasons.push(`Log shows ${temperatureF} F: above 41 F (FDA Food Code 3-501.16)`);
    }
  }
  if (facts.time.hasRun) {
    reasons.push('Ran in between: only a log reading at or under 41 F starts the 4 h anew');
  }
  return {
    atRiskHours: Math.min(atRiskHours, lostHours),
    // A kitchen goes by its log: nothing but a reading tells more than the limit does.
    earliestHours: Math.min(atRiskHours, lostHours),
    likelyHours: lostHours,
    lostHours,
    overrunHours: overrunsOf(facts),
    reasons,
    advice: 'commercial-stock',
  };
}

const isEnd = (hours: number, temperatureF: number): boolean =>
  temperatureF > NEVER_SOLD_ABOVE_F ||
  (temperatureF > NOT_SOLD_LATE_ABOVE_F && hours >= LIMIT_HOURS);

/**
 * Readings since the loss, and the last one before it unless somebody vouches for the moment of the
 * loss: that one tells how the stock started.
 */
function relevantReadings({ readings, coldAtLoss }: FactsInHours): FactsInHours['readings'] {
  const inOrder = [...readings].sort((a, b) => a.hours - b.hours);
  const before = inOrder.filter(({ hours }) => hours < 0);
  return inOrder.slice(before.length - (coldAtLoss === true ? 0 : Math.min(1, before.length)));
}

/**
 * The last moment before `before` at which the stock was known at or under 41 F: a logged reading,
 * or the loss itself when it is known to have been cold then. Negative when the last good
 * reading was before the loss and nobody vouches for the time between; null when there is none.
 */
function lastGoodHours(facts: FactsInHours, before: number): number | null {
  const good = relevantReadings(facts)
    .filter(({ hours, temperatureF }) => hours < before && temperatureF <= COMMERCIAL_LIMIT_F)
    .map(({ hours }) => hours)
    .filter((hours) => hours >= 0 || facts.coldAtLoss !== false);
  if (facts.coldAtLoss === true) good.push(0);
  return good.length === 0 ? null : Math.max(...good);
}

const overrunsOf = (facts: FactsInHours): readonly number[] =>
  relevantReadings(facts)
    .filter(({ hours, temperatureF }) => {
      if (temperatureF <= COMMERCIAL_LIMIT_F) return false;
      const goodFrom = lastGoodHours(facts, hours);
      const limit = goodFrom === null ? UNKNOWN_START_LIMIT_HOURS : goodFrom + LIMIT_HOURS;
      return isEnd(hours, temperatureF) || hours >= limit;
    })
    .map(({ hours }) => hours);

function startReason({ coldAtLoss }: FactsInHours, goodFrom: number | null): string {
  if (goodFrom === null) {
    return 'Not known to be at or under 41 F when cooling was lost: 2 h counted (our estimate)';
  }
  return goodFrom === 0 && coldAtLoss
    ? 'At or under 41 F when cooling was lost: 4 h (FDA Food Code 3-501.19)'
    : 'Log: 4 h from the last reading at or under 41 F (FDA Food Code 3-501.19)';
}
