import fc from 'fast-check';
import {
  coolingLoss,
  type CompartmentFacts,
  type CoolingLoss,
  type UnitOnClock,
} from '@shared/domain/cold-unit';
import { hoursBetween } from '@shared/domain/instant';
import { lossRate } from '@shared/domain/loss-rate';
import { hoursToReach, sizeFactor } from '@shared/domain/thaw/newton';
import { sourcesOf, THAW_SOURCES } from '@shared/domain/thaw/sources';
import { thawClock } from '@shared/domain/thaw/thaw-clock';
import { uncooledTime } from '@shared/domain/thaw/uncooled-time';
import { aCompartment, aMedicine, at, LOST_AT, lossUntil } from './thaw-facts';

const shut72 = { door: 'shut', roomF: 72 } as const;
const fresh = (known: Partial<CompartmentFacts> = {}) =>
  aCompartment('fresh-food', { ...shut72, ...known });
const freezer = (known: Partial<CompartmentFacts> = {}) =>
  aCompartment('freezer', { ...shut72, fill: 0.5, ...known });
const unit = (known: Partial<UnitOnClock> = {}): UnitOnClock => ({
  cubicFeet: null,
  cooling: 'unknown',
  ...known,
});

/** Earliest, likely and latest in hours after the loss. */
function spreadOf(
  facts: CompartmentFacts,
  { loss = lossUntil(), around = unit() }: { loss?: CoolingLoss; around?: UnitOnClock } = {},
) {
  const { earliestAt, likelyAt, saveByAt } = thawClock(facts, loss, around);
  const hours = (moment: number | null) => (moment === null ? null : hoursBetween(LOST_AT, moment));
  return { earliest: hours(earliestAt)!, likely: hours(likelyAt), latest: hours(saveByAt) };
}

const ran = (...spans: readonly (readonly [from: number, to: number])[]): CoolingLoss => ({
  lostAt: LOST_AT,
  restoredAt: null,
  ranSpans: spans.map(([from, to]) => ({ from: at(from), to: at(to) })),
});

describe('Newton’s law', () => {
  // The measurements that the time constants come from, worked back.
  it.each([
    { what: 'published 4 h, 37 to 40 F at 72 F', tau: 44.64, from: 37, to: 40, hours: 4 },
    { what: 'refrigerator, 37 to 41 F in 6 h', tau: 49.44, from: 37, to: 41, hours: 6 },
    { what: 'the same with ice, 10 h', tau: 82.4, from: 37, to: 41, hours: 10 },
  ])('gives back $what', ({ tau, from, to, hours }) => {
    expect(hoursToReach(tau, from, to, 72)).toBeCloseTo(hours, 2);
  });

  it('gives back the logged freezer, in Celsius: empty 3.5 h, and 27.66 h by its fit', () => {
    const hours = (tau: number) => tau * Math.log((19 + 20) / 19);
    expect(hours(4.87)).toBeCloseTo(3.5, 2);
    expect(hours(38.46)).toBeCloseTo(27.66, 2);
  });

  it('gives no credit to a cold room or a large unit', () => {
    expect(hoursToReach(44.64, 37, 40, 50)).toBe(hoursToReach(44.64, 37, 40, 72));
    expect(sizeFactor(40)).toBe(1);
    expect(sizeFactor(2.25)).toBeCloseTo(0.5, 9);
  });
});

describe('how surely contents keep', () => {
  it('says of a shut refrigerator that it may be warm at 2.7 h and is likely so by its limit', () => {
    // 38 F at worst before: 44.64 ln(34 / 32). Measured: 4.43 h to 40 F, past the published 4 h.
    const { earliest, likely, latest } = spreadOf(fresh());
    expect(earliest).toBeCloseTo(2.706, 3);
    expect([likely, latest]).toEqual([4, 4]);
  });

  it('brings the likely moment forward in heat', () => {
    // 49.44 ln((90 - 37) / (90 - 40)) = 2.88 h.
    expect(spreadOf(fresh({ roomF: 90 })).likely).toBeCloseTo(2.881, 3);
  });

  it('is widest where nothing is known', () => {
    const { earliest, likely, latest } = spreadOf(aCompartment('freezer'));
    // A quarter full at 90 F, opened often; half full at 80 F, opened once or twice; 24 h published.
    expect(earliest).toBeCloseTo(17.69 * Math.log(90 / 58) * 0.5, 2);
    expect(likely).toBeCloseTo(38.46 * Math.log(80 / 48) * 0.75, 2);
    expect(latest).toBe(24);
  });

  it.each([
    { fill: 1, earliest: 33.0, likely: 42.4, latest: 48 },
    { fill: 0.5, earliest: 17.9, likely: 22.6, latest: 24 },
    { fill: 0.25, earliest: 10.4, likely: 12, latest: 12 },
  ])('of a freezer filled to $fill goes from $earliest to $latest h', ({ fill, ...hours }) => {
    const spread = spreadOf(freezer({ fill }));
    expect(spread.earliest).toBeCloseTo(hours.earliest, 1);
    expect(spread.likely).toBeCloseTo(hours.likely, 1);
    expect(spread.latest).toBe(hours.latest);
  });

  it('counts on from a cold reading, and leaves the published limit alone', () => {
    const readings = [{ at: at(2), temperatureF: 39 }];
    const read = spreadOf(fresh({ roomF: 90, readings }));
    expect(read.earliest).toBeCloseTo(2 + 44.64 * Math.log(51 / 50), 3);
    expect(read.latest).toBe(4);
    expect(spreadOf(freezer({ readings: [{ at: at(20), temperatureF: 10 }] })).latest).toBe(24);
  });

  it('closes on the moment between the last cold and the first warm reading', () => {
    const readings = [
      { at: at(1), temperatureF: 39 },
      { at: at(2), temperatureF: 44 },
    ];
    expect(spreadOf(fresh({ readings }))).toEqual({ earliest: 1, likely: 2, latest: 3 });
  });

  it('lets ice in a refrigerator move what is likely, and never the limit', () => {
    const hot = fresh({ roomF: 100 });
    const iced = spreadOf({ ...hot, ice: [{ at: at(0.5) }] });
    const plain = spreadOf(hot);
    expect(iced.likely).toBeCloseTo(0.5 + ((plain.likely! - 0.5) * 82.4) / 49.44, 3);
    expect([iced.earliest, iced.latest]).toEqual([plain.earliest, plain.latest]);
  });

  it('lets a unit that runs weakly move what is likely, and never the limit', () => {
    const weak = { around: unit({ cooling: 'partial' }) };
    const plain = spreadOf(freezer({ roomF: 95 }));
    const partly = spreadOf(freezer({ roomF: 95 }), weak);
    expect(partly.likely).toBeGreaterThan(plain.likely!);
    expect(partly.latest).toBe(24);
  });

  it('holds dry ice to its own hours', () => {
    const dryIce = [{ at: at(10), pounds: 50, cubicFeet: 18 }];
    expect(spreadOf(freezer({ fill: 1, dryIce }))).toEqual({
      earliest: 46,
      likely: 58,
      latest: 58,
    });
  });

  it('warms a small unit sooner', () => {
    const small = spreadOf(freezer(), { around: unit({ cubicFeet: 4.5 }) });
    expect(small.likely).toBeCloseTo(22.6 * Math.cbrt(0.25), 1);
    expect(small.latest).toBe(24);
  });

  it('leaves medicine and kitchens to their own rules', () => {
    expect(spreadOf(aMedicine({}, { roomF: 78 }))).toEqual({ earliest: 2, likely: 24, latest: 24 });
    expect(spreadOf(aMedicine({ kind: 'injectable' }))).toEqual({
      earliest: 0,
      likely: null,
      latest: null,
    });
    expect(spreadOf(aCompartment('commercial-stock', { coldAtLoss: true }))).toEqual({
      earliest: 2,
      likely: 4,
      latest: 4,
    });
  });

  it('says its estimates and their source in words, and that the limit stands', () => {
    expect(thawClock(freezer(), lossUntil()).reasons).toContain(
      'Thawing perhaps from 17.9 h, likely from 22.6 h (our estimate from a logged freezer, ' +
        'woodgears.ca/heating/freezer.html, and Newton’s law); the limit of 24 h stands',
    );
  });

  it('names a source for every kind of compartment', () => {
    for (const sources of Object.values(THAW_SOURCES))
      for (const { what, source } of sources)
        expect([what, source.length > 10]).toEqual([what, true]);
    expect(sourcesOf(['fresh-food', 'freezer']).length).toBeLessThan(
      THAW_SOURCES['fresh-food'].length + THAW_SOURCES.freezer.length,
    );
  });
});

describe('power that came back and went again', () => {
  it('adds up the hours without cooling when the unit ran', () => {
    // 3 h out, 2 h on, out again: the fourth hour is over at 6.
    expect(spreadOf(fresh(), { loss: ran([3, 5]) }).latest).toBe(6);
    expect(spreadOf(freezer(), { loss: ran([3, 5], [10, 20]) }).latest).toBe(36);
  });

  it('gives nothing to a unit that stayed dead, or of which nobody knows', () => {
    const times = {
      lostAt: LOST_AT,
      restoredAt: null,
      powerOnSpans: [{ from: at(3), to: at(5) }],
    };
    for (const ranBetween of ['no', 'unknown'] as const)
      expect(spreadOf(fresh(), { loss: coolingLoss(times, ranBetween) }).latest).toBe(4);
    expect(spreadOf(fresh(), { loss: coolingLoss(times, 'yes') }).latest).toBe(6);
  });

  it('begins anew only where a thermometer or a look proved it cold while it ran', () => {
    const cold = fresh({ readings: [{ at: at(8), temperatureF: 38 }] });
    expect(spreadOf(cold, { loss: ran([3, 9]) }).latest).toBe(13);
    const late = fresh({ readings: [{ at: at(9.5), temperatureF: 38 }] });
    expect(spreadOf(late, { loss: ran([3, 9]) }).latest).toBe(10);
    // A freezer that reads 38 F is not frozen again.
    const thawing = freezer({ readings: [{ at: at(8), temperatureF: 38 }] });
    expect(spreadOf(thawing, { loss: ran([3, 9]) }).latest).toBe(30);
    const solid = freezer({ readings: [{ at: at(8), temperatureF: 20 }] });
    expect(spreadOf(solid, { loss: ran([3, 9]) }).latest).toBe(33);
  });

  it('keeps lost what was lost before it ran', () => {
    const cold = fresh({ readings: [{ at: at(8), temperatureF: 38 }] });
    expect(spreadOf(cold, { loss: ran([5, 9]) }).latest).toBe(4);
  });

  it('counts two hours above 40 F on the clock on the wall, running or not', () => {
    const readings = [{ at: at(1), temperatureF: 44 }];
    expect(spreadOf(fresh({ readings }), { loss: ran([1.5, 6]) }).latest).toBe(2);
  });

  it('never gives medicine its days back, nor a kitchen its hours without a log', () => {
    const insulin = aMedicine(
      { kind: 'insulin' },
      { roomF: 75, readings: [{ at: at(60), temperatureF: 40 }] },
    );
    expect(spreadOf(insulin, { loss: ran([50, 70]) }).latest).toBe(692);
    const stock = aCompartment('commercial-stock', { coldAtLoss: true });
    expect(spreadOf(stock, { loss: ran([1, 20]) }).latest).toBe(4);
    const logged = { ...stock, readings: [{ at: at(20), temperatureF: 39 }] };
    expect(spreadOf(logged, { loss: ran([1, 20]) }).latest).toBe(24);
  });

  it('says in words what was done with the hours', () => {
    const cold = fresh({ readings: [{ at: at(8), temperatureF: 38 }] });
    expect(thawClock(fresh(), ran([3, 5])).reasons).toContain(
      'Ran in between: the hours without cooling are added up (USDA FSIS)',
    );
    expect(thawClock(cold, ran([3, 9])).reasons).toContain(
      'Proved cold while it ran in between: counted from when it stopped again',
    );
  });

  it('takes overlapping and early spans for what they are', () => {
    const time = uncooledTime(LOST_AT, [
      { from: at(5), to: at(7) },
      { from: at(-2), to: at(1) },
      { from: at(6), to: at(8) },
    ]);
    expect([0.5, 1, 6, 8, 10].map((hours) => time.uncooledBy(hours))).toEqual([0, 0, 4, 4, 6]);
    expect([0, 4, 6].map((hours) => time.wallAfter(hours))).toEqual([0, 5, 10]);
  });
});

const RUNS = { numRuns: 500, seed: 20_310_915 };
const hundredths = (least: number, most: number) =>
  fc.integer({ min: least * 100, max: most * 100 }).map((hours) => hours / 100);
const moment = hundredths(0, 60).map(at);
const span = fc
  .tuple(moment, moment)
  .map(([a, b]) => ({ from: Math.min(a, b), to: Math.max(a, b) }));

const food: fc.Arbitrary<CompartmentFacts> = fc
  .record({
    kind: fc.constantFrom('fresh-food', 'freezer'),
    fill: fc.option(hundredths(0, 1)),
    door: fc.constantFrom('shut', 'few', 'many', 'unknown'),
    roomF: fc.option(hundredths(50, 115)),
    beforeF: fc.option(hundredths(30, 45)),
    standingOpenSince: fc.option(moment, { freq: 2 }),
    readings: fc.array(fc.record({ at: moment, temperatureF: hundredths(-10, 60) }), {
      maxLength: 3,
    }),
    ice: fc.array(fc.record({ at: moment }), { maxLength: 2 }),
  } as const)
  .map(({ kind, ...known }) => aCompartment(kind, known));

const someUnit: fc.Arbitrary<UnitOnClock> = fc.record({
  cubicFeet: fc.option(hundredths(1, 40)),
  cooling: fc.constantFrom('none', 'partial', 'unknown'),
});
const ROUNDING = 1e-5;

describe('the spread of every clock', () => {
  it('is in order within the published limit', () => {
    fc.assert(
      fc.property(food, someUnit, fc.array(span, { maxLength: 3 }), (facts, around, spans) => {
        const loss = { lostAt: LOST_AT, restoredAt: null, ranSpans: spans };
        const clock = thawClock(facts, loss, around);
        expect(clock.earliestAt).toBeGreaterThanOrEqual(LOST_AT);
        expect(clock.earliestAt).toBeLessThanOrEqual(clock.likelyAt!);
        expect(clock.likelyAt).toBeLessThanOrEqual(clock.saveByAt!);
      }),
      RUNS,
    );
  });

  it('never moves the published limit by size, ice, weak cooling or a unit that did not run', () => {
    fc.assert(
      fc.property(food, someUnit, (facts, around) => {
        const plain = spreadOf({ ...facts, ice: [] }).latest;
        expect(spreadOf(facts, { around }).latest).toBe(plain);
      }),
      RUNS,
    );
  });

  it('never lengthens the hours without cooling: a run gives at most its own length', () => {
    fc.assert(
      fc.property(food, fc.array(span, { maxLength: 3 }), (facts, spans) => {
        // A proof of cold begins anew by the guidance; here there is none.
        const unread = { ...facts, readings: [] };
        const plain = spreadOf(unread).latest!;
        const loss = { lostAt: LOST_AT, restoredAt: null, ranSpans: spans };
        const latest = spreadOf(unread, { loss }).latest!;
        const uncooled = uncooledTime(LOST_AT, spans).uncooledBy(latest);
        expect(uncooled).toBeLessThanOrEqual(plain + ROUNDING);
        expect(latest).toBeGreaterThanOrEqual(plain - ROUNDING);
      }),
      RUNS,
    );
  });

  it('is no later in a hotter room, with less in it, in a smaller unit', () => {
    fc.assert(
      fc.property(
        food,
        hundredths(50, 110),
        hundredths(0, 40),
        hundredths(0, 1),
        hundredths(1, 30),
        (facts, roomF, hotter, share, feet) => {
          const fill = facts.fill ?? 0.5;
          const better = spreadOf({ ...facts, roomF, fill }, { around: unit({ cubicFeet: feet }) });
          const worse = spreadOf(
            { ...facts, roomF: roomF + hotter, fill: fill * share },
            { around: unit({ cubicFeet: feet * 0.8 }) },
          );
          expect(worse.earliest).toBeLessThanOrEqual(better.earliest + ROUNDING);
          expect(worse.likely).toBeLessThanOrEqual(better.likely! + ROUNDING);
          expect(worse.latest).toBeLessThanOrEqual(better.latest! + ROUNDING);
        },
      ),
      RUNS,
    );
  });
});

describe('lossRate', () => {
  const three = fc
    .tuple(hundredths(0, 48), hundredths(0, 48), hundredths(0, 48))
    .map((hours) => [...hours].sort((a, b) => a - b) as [number, number, number]);
  const rate = ([e, m, l]: readonly [number, number, number], hours: number) =>
    lossRate({ earliestAt: at(e), likelyAt: at(m), saveByAt: at(l) }, at(hours));

  it('is even before the earliest, rises to the likely moment, and is twice even after it', () => {
    expect(rate([10, 20, 24], 4)).toBeCloseTo(1 / (20 * 60), 12);
    expect(rate([10, 20, 24], 19)).toBeCloseTo((2 * 9) / (14 * 10 - 81) / 60, 12);
    expect(rate([10, 20, 24], 22)).toBeCloseTo(2 / (2 * 60), 12);
    expect(rate([10, 20, 24], 23.99)).toBe(0.1);
  });

  it('never falls as time passes', () => {
    fc.assert(
      fc.property(three, hundredths(0, 50), hundredths(0, 20), (moments, hours, more) => {
        expect(rate(moments, hours + more)).toBeGreaterThanOrEqual(rate(moments, hours) - 1e-12);
      }),
      RUNS,
    );
  });

  it('is never lower when contents are lost sooner', () => {
    fc.assert(
      fc.property(three, three, hundredths(0, 48), (a, b, hours) => {
        const sooner = a.map((one, i) => Math.min(one, b[i]!)) as [number, number, number];
        expect(rate(sooner, hours)).toBeGreaterThanOrEqual(rate(a, hours) - 1e-12);
      }),
      RUNS,
    );
  });
});
