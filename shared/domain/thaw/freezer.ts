import { hoursInWords, type ClockHours, type FactsInHours } from './facts-in-hours';
import { freezerSpread, FREEZER_SPREAD_SOURCE, type HeldCold } from './freezer-spread';
import { LIKELY_DOOR, LIKELY_ROOM_F } from './newton';
import { spreadReason } from './spread';
import { ABOVE_LIMIT_HOURS, overruns, warmFindings } from './temperature-record';
import { ACT_SHARE, doorFactor, doorInWords, roomFactor, roomInWords, THAW_F } from './warming';

/** Source: USDA FSIS and FDA: a full freezer holds about 48 h, a half-full one 24 h, door shut. */
const FULL_HOURS = 48;
const HALF_FULL_HOURS = 24;

/** From which fill a freezer counts as full or half full. Our estimate; no interpolation above half. */
const FULL_FROM = 0.95;
const HALF_FULL_FROM = 0.5;

/**
 * Below half full the published "half warms twice as fast as full" is carried on in proportion (our
 * estimate, stricter than the "about one day" of University of Missouri Extension QAFS332), and
 * never below the refrigerator's 4 h.
 */
const LEAST_HOURS = 4;

/** With unknown fill the limit stays 24 h, and caution comes from this. Our estimate: a quarter full. */
const UNKNOWN_FILL_WARMING_HOURS = 12;

/** Source: USDA FSIS and FDA: 50 lb of dry ice keep a full 18 cu ft freezer cold for two days. */
const DRY_ICE_POUNDS_PER_CUBIC_FOOT = 50 / 18;

interface Span {
  readonly atRiskHours: number;
  readonly lostHours: number;
}

/**
 * The clock of a freezer.
 *
 * What people found and did is applied in the order in which it happened: ice that was put in
 * before a thermometer showed a warm freezer did not keep it cold. Ice crystals, or 40 F or
 * below at a look inside by a named person, allow refreezing for two hours more.
 */
export function freezerHours(facts: FactsInHours): ClockHours {
  const { fill, door, roomF } = facts;
  const { wallAfter } = facts.time;
  const limitHours = publishedHours(fill);
  const warmingHours =
    (fill === null ? UNKNOWN_FILL_WARMING_HOURS : limitHours) *
    roomFactor(roomF, THAW_F) *
    doorFactor(door);

  const events = eventsOf(facts);
  const start: Span = {
    atRiskHours: wallAfter(Math.min(warmingHours, ACT_SHARE * limitHours)),
    lostHours: wallAfter(limitHours),
  };
  const end = events.reduce((span, event) => event.apply(span), start);
  const lostHours = Math.max(0, end.lostHours);

  const reasons = [
    `${fillInWords(fill)} freezer${door === 'shut' ? ', door shut' : ''}: ${limitSource(fill)}`,
    ...events.map(({ reason }) => reason),
  ];
  if (warmingHours < ACT_SHARE * limitHours && end.atRiskHours === start.atRiskHours) {
    reasons.push(
      `At risk from ${hoursInWords(start.atRiskHours)}: ` +
        `${roomInWords(roomF)}, ${doorInWords(door)} (our estimate)`,
    );
  }
  const spread = freezerSpread(facts, warmingHours, heldCold(facts), lostHours);
  reasons.push(...spreadReason('Thawing', spread, lostHours, FREEZER_SPREAD_SOURCE));
  return {
    ...spread,
    atRiskHours: Math.min(Math.max(0, end.atRiskHours), lostHours),
    lostHours,
    overrunHours: overruns(warmFindings(facts)),
    reasons,
    advice: 'freezer',
  };
}

function publishedHours(fill: number | null): number {
  if (fill === null) return HALF_FULL_HOURS;
  if (fill >= FULL_FROM) return FULL_HOURS;
  if (fill >= HALF_FULL_FROM) return HALF_FULL_HOURS;
  return Math.max(LEAST_HOURS, FULL_HOURS * fill);
}

interface FreezerEvent {
  readonly hours: number;
  /** At one moment: first what was found inside, then what was done about it. */
  readonly rank: number;
  readonly reason: string;
  readonly apply: (span: Span) => Span;
}

function eventsOf(facts: FactsInHours): readonly FreezerEvent[] {
  const events = [...looksInside(facts), ...warmReadings(facts), ...iceAdded(facts)];
  const openFrom = facts.standingOpenFrom;
  if (openFrom !== null) {
    events.push({
      hours: openFrom,
      rank: 1,
      reason: 'Door found standing open: no published hour, so look inside (our estimate)',
      apply: (span) => ({ ...span, atRiskHours: Math.min(span.atRiskHours, openFrom) }),
    });
  }
  return events.sort((a, b) => a.hours - b.hours || a.rank - b.rank);
}

const looksInside = ({ inspections }: FactsInHours): FreezerEvent[] =>
  inspections
    // While the unit still ran a look inside proves nothing about what came after.
    .filter(({ hours, finding }) => finding !== 'thawed' && hours >= 0)
    .map(({ hours, finding }) => ({
      hours,
      rank: 0,
      reason:
        `${finding === 'ice-crystals' ? 'Ice crystals' : '40 F or below'} found after ` +
        `${hoursInWords(hours)}: may be refrozen, act within 2 h (USDA FSIS, FDA)`,
      apply: (span) => ({
        atRiskHours: Math.min(span.atRiskHours, hours),
        lostHours: Math.max(span.lostHours, hours + ABOVE_LIMIT_HOURS),
      }),
    }));

const warmReadings = (facts: FactsInHours): FreezerEvent[] =>
  warmFindings(facts).map(({ hours, coldUntilHours }) => ({
    hours,
    rank: 1,
    reason: 'Found above 40 F: published limit 2 h from when it was last cold (USDA FSIS)',
    apply: (span) => {
      const lostHours = Math.min(span.lostHours, coldUntilHours + ABOVE_LIMIT_HOURS);
      const atRiskHours = Math.min(span.atRiskHours, coldUntilHours, ACT_SHARE * lostHours);
      return { atRiskHours, lostHours };
    },
  }));

type DryIceInHours = FactsInHours['dryIce'][number];

const realIce = ({ dryIce }: FactsInHours): readonly DryIceInHours[] =>
  dryIce.filter(({ pounds, cubicFeet }) => pounds > 0 && cubicFeet > 0);

/** How long dry ice holds a freezer by the published rule, in proportion to its pounds. */
function heldHoursOf({ pounds, cubicFeet }: DryIceInHours, fill: number | null): number {
  const mostHours = fill !== null && fill >= FULL_FROM ? FULL_HOURS : HALF_FULL_HOURS;
  return mostHours * Math.min(1, pounds / cubicFeet / DRY_ICE_POUNDS_PER_CUBIC_FOOT);
}

const heldCold = (facts: FactsInHours): readonly HeldCold[] =>
  realIce(facts).map((ice) => {
    const heldHours = heldHoursOf(ice, facts.fill);
    const { roomF, door } = facts;
    return {
      hours: ice.hours,
      possibleHours: ACT_SHARE * heldHours * roomFactor(roomF, THAW_F) * doorFactor(door),
      likelyHours: heldHours * roomFactor(roomF ?? LIKELY_ROOM_F, THAW_F) * LIKELY_DOOR[door],
    };
  });

const iceAdded = (facts: FactsInHours): FreezerEvent[] =>
  realIce(facts).map((ice) => {
    const { fill, roomF, door } = facts;
    const { hours, pounds, cubicFeet } = ice;
    const heldHours = heldHoursOf(ice, fill);
    return {
      hours,
      rank: 2,
      reason:
        `${pounds} lb of dry ice in ${cubicFeet} cu ft after ${hoursInWords(hours)}: ` +
        `${hoursInWords(heldHours)} from then (USDA FSIS, FDA: 50 lb in a full 18 cu ft, 2 days)`,
      apply: (span) => {
        // Ice that comes too late revives nothing, and a little ice never shortens anything.
        if (hours >= span.lostHours) return span;
        const warmHours = ACT_SHARE * heldHours * roomFactor(roomF, THAW_F) * doorFactor(door);
        const isStillSafe = hours < span.atRiskHours;
        return {
          atRiskHours: isStillSafe
            ? Math.max(span.atRiskHours, hours + warmHours)
            : span.atRiskHours,
          lostHours: Math.max(span.lostHours, hours + heldHours),
        };
      },
    };
  });

function fillInWords(fill: number | null): string {
  if (fill === null) return 'Unknown how full:';
  if (fill >= FULL_FROM) return 'Full';
  return fill >= HALF_FULL_FROM ? 'Half-full' : `${Math.round(fill * 100)} % full`;
}

function limitSource(fill: number | null): string {
  const hours = hoursInWords(publishedHours(fill));
  if (fill !== null && fill < HALF_FULL_FROM) {
    return `${hours}, in proportion to the published 48 h of a full one (our estimate)`;
  }
  return `published limit ${hours} (USDA FSIS)`;
}
