import { hoursInWords, type ClockHours, type FactsInHours } from './facts-in-hours';
import { ABOVE_LIMIT_HOURS, overruns, warmFindings } from './temperature-record';
import {
  ACT_SHARE,
  ASSUMED_ROOM_F,
  CONSUMER_LIMIT_F,
  doorFactor,
  doorInWords,
  roomFactor,
  roomInWords,
  startFactor,
} from './warming';

/**
 * Hours that a shut refrigerator keeps food.
 * Source: USDA food-safety FAQ; FSIS storm advisories 2012-2024: "no more than 4 hours".
 */
const SHUT_REFRIGERATOR_HOURS = 4;

/** Above 90 F food that stands out keeps 1 h instead of 2. Source: county and NSF advice after FSIS. */
const HOT_ROOM_F = 90;
const ABOVE_LIMIT_HOT_ROOM_HOURS = 1;

/**
 * The clock of a refrigerator's fresh food.
 *
 * Lost at 4 h, or 2 h after it was last known at or under 40 F if it was found warm or the door was
 * found standing open (1 h when the open door met a room above 90 F). Never later than 4 h.
 */
export function freshFoodHours(facts: FactsInHours): ClockHours {
  const { door, roomF, beforeF, standingOpenFrom } = facts;
  const findings = warmFindings(facts);
  const warmFrom = Math.min(
    standingOpenFrom ?? Infinity,
    ...findings.map(({ coldUntilHours }) => coldUntilHours),
  );
  const isOpenInHeat = standingOpenFrom !== null && (roomF ?? ASSUMED_ROOM_F) > HOT_ROOM_F;
  const allowedWarmHours = isOpenInHeat ? ABOVE_LIMIT_HOT_ROOM_HOURS : ABOVE_LIMIT_HOURS;

  const lostHours = Math.max(0, Math.min(SHUT_REFRIGERATOR_HOURS, warmFrom + allowedWarmHours));
  const warmingHours =
    SHUT_REFRIGERATOR_HOURS *
    roomFactor(roomF, CONSUMER_LIMIT_F) *
    doorFactor(door) *
    startFactor(beforeF);
  const atRiskHours = Math.max(0, Math.min(warmingHours, warmFrom, ACT_SHARE * lostHours));

  const reasons = [
    door === 'shut'
      ? 'Refrigerator, door shut: published limit 4 h (USDA FSIS)'
      : 'Refrigerator: published limit 4 h with the door shut (USDA FSIS)',
  ];
  if (findings.length > 0) {
    reasons.push('Found above 40 F: published limit 2 h from when it was last cold (USDA FSIS)');
  }
  if (standingOpenFrom !== null) {
    const limit = hoursInWords(allowedWarmHours);
    const heat = isOpenInHeat ? ' in a room above 90 F' : '';
    reasons.push(`Door found standing open${heat}: published limit ${limit} (USDA FSIS)`);
  }
  if (warmingHours < ACT_SHARE * lostHours && warmingHours <= warmFrom) {
    const weak = beforeF !== null && startFactor(beforeF) < 1 ? `, ${beforeF} F before` : '';
    reasons.push(
      `At risk from ${hoursInWords(atRiskHours)}: ` +
        `${roomInWords(roomF)}, ${doorInWords(door)}${weak} (our estimate)`,
    );
  }
  return {
    atRiskHours,
    lostHours,
    overrunHours: overruns(findings),
    reasons,
    advice: 'fresh-food',
  };
}
