import { hoursInWords, type ClockHours, type FactsInHours } from './facts-in-hours';
import { hoursToReach, LIKELY_DOOR, LIKELY_ROOM_F, PARTLY_COOLED, sizeFactor } from './newton';
import {
  doorFoundOpen,
  laterBy,
  spreadReason,
  spreadWithin,
  type Spread,
  type SpreadEvent,
} from './spread';
import { ABOVE_LIMIT_HOURS, overruns, warmFindings } from './temperature-record';
import {
  ASSUMED_BEFORE_F,
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
 * Time constants, hours: of the published 4 h (37 to 40 F in a 72 F room), and of the refrigerator that
 * held food for 6 h before it reached 41 F, or about 10 h with ice added.
 * Source: Scarcelli and Nelson, FIU Hospitality Review 31(2), article 5, 2013; through Newton's law.
 */
const PUBLISHED_TAU_HOURS = 44.64;
const MEASURED_TAU_HOURS = 49.44;
const WITH_ICE_TAU_HOURS = 82.4;

/** A unit that worked may have been this warm before the loss, at worst. Our estimate, no source. */
const WARM_BEFORE_F = 38;

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

  const { wallAfter } = facts.time;
  const limitHours = wallAfter(SHUT_REFRIGERATOR_HOURS);
  const lostHours = Math.max(0, Math.min(limitHours, warmFrom + allowedWarmHours));
  const warmingHours =
    SHUT_REFRIGERATOR_HOURS *
    roomFactor(roomF, CONSUMER_LIMIT_F) *
    doorFactor(door) *
    startFactor(beforeF);
  const actHours = wallAfter(ACT_SHARE * SHUT_REFRIGERATOR_HOURS);
  const atRiskHours = Math.max(0, Math.min(wallAfter(warmingHours), warmFrom, actHours, lostHours));

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
  if (wallAfter(warmingHours) < actHours && wallAfter(warmingHours) <= warmFrom) {
    const weak = beforeF !== null && startFactor(beforeF) < 1 ? `, ${beforeF} F before` : '';
    reasons.push(
      `At risk from ${hoursInWords(atRiskHours)}: ` +
        `${roomInWords(roomF)}, ${doorInWords(door)}${weak} (our estimate)`,
    );
  }
  if (facts.ice.length > 0) {
    reasons.push('Ice put in: no published hour, so the limit stands without a thermometer (USDA)');
  }
  const spread = freshFoodSpread(facts, lostHours);
  reasons.push(...spreadReason('Above 40 F', spread, lostHours, MEASURED));
  return {
    ...spread,
    atRiskHours,
    lostHours,
    overrunHours: overruns(findings),
    reasons,
    advice: 'fresh-food',
  };
}

const MEASURED = 'Scarcelli and Nelson, FIU Hospitality Review 31(2), 2013, and Newton’s law';

/** When the food may have passed 40 F, and when it likely has; the 2 h that it may then have are not added. */
function freshFoodSpread(facts: FactsInHours, lostHours: number): Spread {
  const { beforeF, readings, inspections, ice, standingOpenFrom } = facts;
  const events: SpreadEvent[] = [
    ...readings
      .filter(({ temperatureF }) => temperatureF <= CONSUMER_LIMIT_F)
      .map(({ hours, temperatureF }) => ({
        hours,
        rank: 0,
        apply: (): Spread => ({
          earliestHours: laterBy(facts, hours, possibleHours(facts, temperatureF)),
          likelyHours: laterBy(
            facts,
            hours,
            likelyHours(facts, temperatureF, hadIce(facts, hours)),
          ),
        }),
      })),
    ...inspections.map(({ hours }) => ({
      hours,
      rank: 0,
      apply: (spread: Spread): Spread => ({
        earliestHours: Math.max(spread.earliestHours, hours),
        likelyHours: Math.max(spread.likelyHours, hours),
      }),
    })),
    ...ice.map(({ hours }) => ({
      hours,
      rank: 2,
      apply: (spread: Spread): Spread => {
        if (hours >= spread.likelyHours || hadIce(facts, hours)) return spread;
        const left = facts.time.uncooledBy(spread.likelyHours) - facts.time.uncooledBy(hours);
        const longer = (left * WITH_ICE_TAU_HOURS) / MEASURED_TAU_HOURS;
        return { ...spread, likelyHours: laterBy(facts, hours, longer) };
      },
    })),
    ...(standingOpenFrom === null ? [] : [doorFoundOpen(standingOpenFrom)]),
  ];
  const start = {
    earliestHours: facts.time.wallAfter(possibleHours(facts, beforeF ?? WARM_BEFORE_F)),
    likelyHours: facts.time.wallAfter(likelyHours(facts, beforeF ?? ASSUMED_BEFORE_F, false)),
  };
  return spreadWithin(start, events, warmFindings(facts), lostHours);
}

const hadIce = ({ ice }: FactsInHours, before: number): boolean =>
  ice.some(({ hours }) => hours < before);

const possibleHours = ({ roomF, door, unitCubicFeet }: FactsInHours, fromF: number): number =>
  hoursToReach(PUBLISHED_TAU_HOURS, fromF, CONSUMER_LIMIT_F, roomF ?? ASSUMED_ROOM_F) *
  doorFactor(door) *
  sizeFactor(unitCubicFeet);

const likelyHours = (facts: FactsInHours, fromF: number, withIce: boolean): number =>
  hoursToReach(
    withIce ? WITH_ICE_TAU_HOURS : MEASURED_TAU_HOURS,
    fromF,
    CONSUMER_LIMIT_F,
    facts.roomF ?? LIKELY_ROOM_F,
  ) *
  LIKELY_DOOR[facts.door] *
  sizeFactor(facts.unitCubicFeet) *
  (facts.isPartlyCooled ? PARTLY_COOLED : 1);
