import fc from 'fast-check';
import {
  COMPARTMENT_KINDS,
  DOOR_USES,
  INSPECTION_FINDINGS,
  MEDICINE_KINDS,
  type CompartmentFacts,
  type CompartmentKind,
  type DoorUse,
  type DryIce,
  type Inspection,
  type Medicine,
  type Reading,
} from '@shared/domain/cold-unit';
import { HOUR_MS } from '@shared/domain/instant';
import { COMPARTMENT_STATES, compartmentState, thawClock } from '@shared/domain/thaw/thaw-clock';
import { at, hoursFor, lossUntil } from './thaw-facts';

/**
 * The envelope around every clock: never more permissive than published, and never kinder for a
 * hotter room, a worse door, less fill or a warmer start.
 */
const RUNS = { numRuns: 1_000, seed: 20_310_914 };

/** Hundredths, so that every part of the range is tried and equal moments meet. */
const hours = (least: number, most: number) =>
  fc.integer({ min: least * 100, max: most * 100 }).map((hundredths) => hundredths / 100);

const moment = (least = -6, most = 80) => hours(least, most).map(at);

const aReading: fc.Arbitrary<Reading> = fc.record({ at: moment(), temperatureF: hours(-10, 70) });
const anInspection: fc.Arbitrary<Inspection> = fc.record({
  at: moment(),
  finding: fc.constantFrom(...INSPECTION_FINDINGS),
});
const someIce: fc.Arbitrary<DryIce> = fc.record({
  at: moment(),
  pounds: hours(0, 100),
  cubicFeet: hours(0, 30),
});
const aMedicine: fc.Arbitrary<Medicine> = fc.record({
  kind: fc.constantFrom(...MEDICINE_KINDS),
  labelHours: fc.option(hours(0, 700)),
  labelMaxF: fc.option(hours(60, 100)),
  frozen: fc.boolean(),
  hoursAlreadyUnrefrigerated: fc.oneof(fc.constant(0), hours(0, 800)),
});

const compartment = (
  kinds: readonly CompartmentKind[] = COMPARTMENT_KINDS,
): fc.Arbitrary<CompartmentFacts> =>
  fc.record({
    kind: fc.constantFrom(...kinds),
    fill: fc.option(hours(0, 1)),
    door: fc.constantFrom(...DOOR_USES),
    standingOpenSince: fc.option(moment(), { freq: 2 }),
    roomF: fc.option(hours(20, 120)),
    beforeF: fc.option(hours(30, 50)),
    readings: fc.array(aReading, { maxLength: 4 }),
    inspections: fc.array(anInspection, { maxLength: 2 }),
    dryIce: fc.array(someIce, { maxLength: 2 }),
    ice: fc.array(fc.record({ at: moment() }), { maxLength: 2 }),
    medicine: fc.option(aMedicine),
    coldAtLoss: fc.option(fc.boolean()),
    valueCents: fc.nat(100_000),
  });

/** A millisecond of rounding, in hours. */
const ROUNDING = 2 / HOUR_MS;
const hard = (lost: number | null) => lost ?? Infinity;

function expectNoLater(worse: CompartmentFacts, better: CompartmentFacts): void {
  const [a, b] = [hoursFor(worse), hoursFor(better)];
  expect(a.atRisk).toBeLessThanOrEqual(b.atRisk + ROUNDING);
  expect(hard(a.lost)).toBeLessThanOrEqual(hard(b.lost) + ROUNDING);
}

describe('every thaw clock', () => {
  it('has 0 <= at-risk <= lost', () => {
    fc.assert(
      fc.property(compartment(), fc.option(hours(0, 60)), (facts, restored) => {
        const { atRisk, lost } = hoursFor(facts, restored);
        expect(atRisk).toBeGreaterThanOrEqual(0);
        expect(atRisk).toBeLessThanOrEqual(hard(lost));
      }),
      RUNS,
    );
  });

  it('gives at least one reason, and finite whole moments', () => {
    fc.assert(
      fc.property(compartment(), (facts) => {
        const clock = thawClock(facts, lossUntil());
        expect(clock.reasons.length).toBeGreaterThan(0);
        expect(Number.isSafeInteger(clock.atRiskAt)).toBe(true);
        expect(clock.saveByAt === null || Number.isSafeInteger(clock.saveByAt)).toBe(true);
      }),
      RUNS,
    );
  });

  it('is never later in a hotter room', () => {
    fc.assert(
      fc.property(compartment(), hours(20, 120), hours(0, 60), (facts, roomF, more) => {
        expectNoLater({ ...facts, roomF: roomF + more }, { ...facts, roomF });
      }),
      RUNS,
    );
  });

  it('is never later with a worse door', () => {
    const order: readonly DoorUse[] = ['shut', 'few', 'many', 'unknown'];
    fc.assert(
      fc.property(compartment(), fc.nat(3), fc.nat(3), (facts, i, j) => {
        const [better, worse] = [order[Math.min(i, j)]!, order[Math.max(i, j)]!];
        expectNoLater({ ...facts, door: worse }, { ...facts, door: better });
      }),
      RUNS,
    );
  });

  it('is never later with less in the freezer', () => {
    fc.assert(
      fc.property(compartment(), hours(0, 1), hours(0, 1), (facts, a, b) => {
        expectNoLater({ ...facts, fill: Math.min(a, b) }, { ...facts, fill: Math.max(a, b) });
      }),
      RUNS,
    );
  });

  it('is never later after a warmer start', () => {
    fc.assert(
      fc.property(compartment(), hours(30, 50), hours(0, 20), (facts, beforeF, more) => {
        expectNoLater({ ...facts, beforeF: beforeF + more }, { ...facts, beforeF });
      }),
      RUNS,
    );
  });

  it('never has at-risk later once a room at or under 90 F is not known any more', () => {
    fc.assert(
      fc.property(compartment(), hours(20, 90), (facts, roomF) => {
        const known = hoursFor({ ...facts, roomF });
        expect(hoursFor({ ...facts, roomF: null }).atRisk).toBeLessThanOrEqual(
          known.atRisk + ROUNDING,
        );
      }),
      RUNS,
    );
  });

  it('never goes back as time passes without cooling', () => {
    fc.assert(
      fc.property(compartment(), hours(0, 800), hours(0, 800), (facts, t, more) => {
        const clock = thawClock(facts, lossUntil());
        const rankAt = (after: number) =>
          COMPARTMENT_STATES.indexOf(compartmentState(clock, lossUntil(), at(after)));
        expect(rankAt(t + more)).toBeGreaterThanOrEqual(rankAt(t));
      }),
      RUNS,
    );
  });

  it('never leaves lost by cooling that came back afterwards', () => {
    fc.assert(
      fc.property(compartment(), hours(0, 100), hours(0, 100), (facts, restored, later) => {
        // Only what was known until then: a record made later may tell otherwise.
        const known = { ...facts, readings: [], inspections: [], dryIce: [] };
        const before = compartmentState(thawClock(known, lossUntil()), lossUntil(), at(restored));
        fc.pre(before === 'lost');
        const loss = lossUntil(restored);
        const after = compartmentState(thawClock(known, loss), loss, at(restored + later));
        expect(after).toBe('lost');
      }),
      RUNS,
    );
  });
});

describe('the published limits', () => {
  it('hold for fresh food: never more than 4 h', () => {
    fc.assert(
      fc.property(compartment(['fresh-food']), (facts) => {
        expect(hard(hoursFor(facts).lost)).toBeLessThanOrEqual(4);
      }),
      RUNS,
    );
  });

  it('hold for a freezer without ice or inspection: 48 h full, 24 h otherwise', () => {
    fc.assert(
      fc.property(compartment(['freezer']), (facts) => {
        const lost = hard(hoursFor({ ...facts, dryIce: [], inspections: [] }).lost);
        expect(lost).toBeLessThanOrEqual((facts.fill ?? 0) >= 0.95 ? 48 : 24);
      }),
      RUNS,
    );
  });

  it('hold for stock without a log: never more than 4 h', () => {
    fc.assert(
      fc.property(compartment(['commercial-stock']), (facts) => {
        expect(hard(hoursFor({ ...facts, readings: [] }).lost)).toBeLessThanOrEqual(4);
      }),
      RUNS,
    );
  });

  it('hold for stock with a log: never more than 4 h from the last good reading', () => {
    fc.assert(
      fc.property(compartment(['commercial-stock']), (facts) => {
        const good = facts.readings.filter(({ temperatureF }) => temperatureF <= 41);
        const last = Math.max(at(0), ...good.map((reading) => reading.at));
        const { saveByAt } = thawClock(facts, lossUntil());
        expect(saveByAt).toBeLessThanOrEqual(last + 4 * HOUR_MS + 1);
      }),
      RUNS,
    );
  });

  it('hold for a measured household compartment: at most 2 h after it was last known cold', () => {
    fc.assert(
      fc.property(
        compartment(['fresh-food', 'freezer']),
        hours(0.5, 40),
        hours(0.01, 10),
        (facts, coldUntil, later) => {
          const measured: CompartmentFacts = {
            ...facts,
            dryIce: [],
            inspections: [],
            readings: [
              { at: at(coldUntil), temperatureF: 38 },
              { at: at(coldUntil + later), temperatureF: 45 },
            ],
          };
          expect(hard(hoursFor(measured).lost)).toBeLessThanOrEqual(coldUntil + 2 + ROUNDING);
        },
      ),
      RUNS,
    );
  });

  it('hold for insulin: never more than the 28 days less what was used up', () => {
    fc.assert(
      fc.property(compartment(['medicine']), hours(0, 800), (facts, used) => {
        const insulin: Medicine = {
          kind: 'insulin',
          labelHours: null,
          labelMaxF: null,
          frozen: false,
          hoursAlreadyUnrefrigerated: used,
        };
        const { lost } = hoursFor({ ...facts, medicine: insulin });
        expect(hard(lost)).toBeLessThanOrEqual(Math.max(0, 672 - used) + ROUNDING);
      }),
      RUNS,
    );
  });
});

describe('what people log', () => {
  it('brings lost contents back only by an inspection, a reading or ice', () => {
    // Everything else that can be learned makes it worse or leaves it.
    fc.assert(
      fc.property(compartment(), moment(0), hours(0, 80), (facts, openSince, t) => {
        const before = compartmentState(thawClock(facts, lossUntil()), lossUntil(), at(t));
        fc.pre(before === 'lost' && facts.standingOpenSince === null);
        const learned = { ...facts, standingOpenSince: openSince };
        const after = compartmentState(thawClock(learned, lossUntil()), lossUntil(), at(t));
        expect(after).toBe('lost');
      }),
      RUNS,
    );
  });

  it('is never brought back by a warm reading', () => {
    fc.assert(
      fc.property(compartment(), aReading, hours(50.5, 80), (facts, reading, warmF) => {
        // A kitchen's log has its own limit of 41 F; 50.5 F is warm for all.
        const warm = { ...reading, temperatureF: warmF };
        fc.pre(warm.at >= at(0));
        expectNoLater({ ...facts, readings: [...facts.readings, warm] }, facts);
      }),
      RUNS,
    );
  });

  it('never makes a freezer worse by adding ice', () => {
    fc.assert(
      fc.property(compartment(['freezer']), someIce, (facts, ice) => {
        expectNoLater(facts, { ...facts, dryIce: [...facts.dryIce, ice] });
      }),
      RUNS,
    );
  });

  it('never revives a freezer by ice after its save-by', () => {
    fc.assert(
      fc.property(compartment(['freezer']), someIce, hours(0, 60), (facts, ice, late) => {
        const before = { ...facts, inspections: [] };
        const saveBy = hard(thawClock(before, lossUntil()).saveByAt);
        const tooLate = { ...ice, at: saveBy + 1 + late * HOUR_MS };
        const after = { ...before, dryIce: [...before.dryIce, tooLate] };
        expect(hoursFor(after)).toEqual(hoursFor(before));
      }),
      RUNS,
    );
  });

  it('does not depend on the order in which it was written down', () => {
    fc.assert(
      fc.property(compartment(), (facts) => {
        const backwards = {
          ...facts,
          readings: [...facts.readings].reverse(),
          inspections: [...facts.inspections].reverse(),
          dryIce: [...facts.dryIce].reverse(),
        };
        expect(hoursFor(backwards)).toEqual(hoursFor(facts));
      }),
      RUNS,
    );
  });
});
