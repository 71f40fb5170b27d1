import type { FactsInHours } from './facts-in-hours';
import { hoursToReach, LIKELY_DOOR, LIKELY_ROOM_F, PARTLY_COOLED, sizeFactor } from './newton';
import { doorFoundOpen, laterBy, spreadWithin, type Spread, type SpreadEvent } from './spread';
import { warmFindings } from './temperature-record';
import { ASSUMED_ROOM_F, CONSUMER_LIMIT_F, doorFactor, THAW_F } from './warming';

/**
 * Time constants of a freezer, hours, through Newton's law from one logged test of an upright freezer in
 * a room of 19 C: empty, -20 to 0 C took 3.5 h; with food, -11.5 C was reached after 7.5 h, and the
 * author's fit over the whole test is 2.6 % of the cold lost per hour.
 * Source: woodgears.ca/heating/freezer.html, a hobby engineer's test with its data.
 */
const EMPTY_TAU_HOURS = 4.87;
const LEAST_TAU_WITH_FOOD_HOURS = 30.51;
const FITTED_TAU_WITH_FOOD_HOURS = 38.46;

/** The author does not say how full it was; taken as half. Our estimate. */
const LOGGED_FILL = 0.5;

/** With unknown fill: at worst, and as it mostly is. Our estimates, no source. */
const POSSIBLE_FILL = 0.25;
const LIKELY_FILL = 0.5;

/** Source: USDA FSIS: a freezer is set to 0 F or below. */
const SET_POINT_F = 0;

export const FREEZER_SPREAD_SOURCE =
  'a logged freezer, woodgears.ca/heating/freezer.html, and Newton’s law';

/** Ice that was put in: how long it held its cold by the published rule, and by the cautious one. */
export interface HeldCold {
  readonly hours: number;
  readonly possibleHours: number;
  readonly likelyHours: number;
}

/**
 * When a freezer may have begun to thaw (32 F), and when it likely has. The hours that its ice then
 * still melts are not added.
 *
 * @param cautiousHours the hours without cooling after which it counts as warming, at worst
 */
export function freezerSpread(
  facts: FactsInHours,
  cautiousHours: number,
  held: readonly HeldCold[],
  lostHours: number,
): Spread {
  const beforeF = Math.max(SET_POINT_F, facts.beforeF ?? SET_POINT_F);
  const start: Spread = {
    earliestHours: facts.time.wallAfter(
      Math.min(cautiousHours, possibleHours(facts, beforeF, THAW_F)),
    ),
    likelyHours: facts.time.wallAfter(likelyHours(facts, beforeF, THAW_F)),
  };
  const events: SpreadEvent[] = [...coldReadings(facts), ...coldLooks(facts), ...iceHolds(held)];
  if (facts.standingOpenFrom !== null) events.push(doorFoundOpen(facts.standingOpenFrom));
  return spreadWithin(start, events, warmFindings(facts), lostHours);
}

/** A reading tells where the contents stand: still frozen, or thawing and not yet warm. */
const coldReadings = (facts: FactsInHours): SpreadEvent[] =>
  facts.readings
    .filter(({ temperatureF }) => temperatureF <= CONSUMER_LIMIT_F)
    .map(({ hours, temperatureF }) => {
      const limitF = temperatureF < THAW_F ? THAW_F : CONSUMER_LIMIT_F;
      return {
        hours,
        rank: 0,
        apply: () => ({
          earliestHours:
            temperatureF < THAW_F
              ? laterBy(facts, hours, possibleHours(facts, temperatureF, limitF))
              : hours,
          likelyHours: laterBy(facts, hours, likelyHours(facts, temperatureF, limitF)),
        }),
      };
    });

/** Ice crystals, or 40 F or below: cold until then, and no sooner warm than water at 32 F would be. */
const coldLooks = (facts: FactsInHours): SpreadEvent[] =>
  facts.inspections
    .filter(({ finding }) => finding !== 'thawed')
    .map(({ hours }) => ({
      hours,
      rank: 0,
      apply: (spread) => ({
        earliestHours: Math.max(spread.earliestHours, hours),
        likelyHours: Math.max(
          spread.likelyHours,
          laterBy(facts, hours, likelyHours(facts, THAW_F, CONSUMER_LIMIT_F)),
        ),
      }),
    }));

const iceHolds = (held: readonly HeldCold[]): SpreadEvent[] =>
  held.map(({ hours, possibleHours, likelyHours }) => ({
    hours,
    rank: 2,
    apply: (spread) => ({
      earliestHours:
        hours < spread.earliestHours
          ? Math.max(spread.earliestHours, hours + possibleHours)
          : spread.earliestHours,
      likelyHours:
        hours < spread.likelyHours
          ? Math.max(spread.likelyHours, hours + likelyHours)
          : spread.likelyHours,
    }),
  }));

const possibleHours = (facts: FactsInHours, fromF: number, limitF: number): number =>
  hoursToReach(
    tauHours(LEAST_TAU_WITH_FOOD_HOURS, facts.fill ?? POSSIBLE_FILL),
    fromF,
    limitF,
    facts.roomF ?? ASSUMED_ROOM_F,
  ) *
  doorFactor(facts.door) *
  sizeFactor(facts.unitCubicFeet);

const likelyHours = (facts: FactsInHours, fromF: number, limitF: number): number =>
  hoursToReach(
    tauHours(FITTED_TAU_WITH_FOOD_HOURS, facts.fill ?? LIKELY_FILL),
    fromF,
    limitF,
    facts.roomF ?? LIKELY_ROOM_F,
  ) *
  LIKELY_DOOR[facts.door] *
  sizeFactor(facts.unitCubicFeet) *
  (facts.isPartlyCooled ? PARTLY_COOLED : 1);

/** What is in a freezer holds its cold in proportion to how much it is. */
const tauHours = (withFoodHours: number, fill: number): number =>
  EMPTY_TAU_HOURS + (fill / LOGGED_FILL) * (withFoodHours - EMPTY_TAU_HOURS);
