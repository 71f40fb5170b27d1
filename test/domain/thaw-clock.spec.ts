import type { CompartmentFacts, Reading } from '@shared/domain/cold-unit';
import { HOUR_MS } from '@shared/domain/instant';
import { ADVICE, ADVICE_KEYS } from '@shared/domain/thaw/advice';
import { compartmentState, savedBy, stateInWords, thawClock } from '@shared/domain/thaw/thaw-clock';
import { roomFactor, startFactor } from '@shared/domain/thaw/warming';
import { aCompartment, aMedicine, at, hoursFor, LOST_AT, lossUntil } from './thaw-facts';

const shut72 = { door: 'shut', roomF: 72 } as const;
const reading = (hours: number, temperatureF: number): Reading => ({ at: at(hours), temperatureF });
const fresh = (known: Partial<CompartmentFacts> = {}) =>
  aCompartment('fresh-food', { ...shut72, ...known });
const fullFreezer = (known: Partial<CompartmentFacts> = {}) =>
  aCompartment('freezer', { ...shut72, fill: 1, ...known });
const stock = (known: Partial<CompartmentFacts> = {}) =>
  aCompartment('commercial-stock', { coldAtLoss: true, ...known });

function stateAfter(facts: CompartmentFacts, hours: number, restored: number | null = null) {
  const loss = lossUntil(restored);
  return compartmentState(thawClock(facts, loss), loss, at(hours));
}

describe('warming factors', () => {
  // Set against Newton's law fitted to the published 4 h (37 to 40 F at 72 F, time constant 44.64 h).
  const newtonHours = (roomF: number, startF: number) =>
    44.64 * Math.log((roomF - startF) / (roomF - 40));

  it.each([73, 80, 90, 100, 110])('are no more generous than Newton at %d F', (roomF) => {
    const hours = 4 * roomFactor(roomF, 40);
    expect(hours).toBeLessThanOrEqual(newtonHours(roomF, 37));
    expect(hours).toBeGreaterThan(newtonHours(roomF, 37) * 0.97);
  });

  it.each([
    { beforeF: 38, hours: 2.71 },
    { beforeF: 39, hours: 1.37 },
  ])('leave $hours h to a refrigerator that was at $beforeF F', ({ beforeF, hours }) => {
    expect(4 * startFactor(beforeF)).toBeCloseTo(hours, 2);
  });

  it('give no credit to a colder start or a colder room', () => {
    expect(startFactor(33)).toBe(1);
    expect(roomFactor(20, 40)).toBe(1);
  });
});

describe('thawClock for fresh food', () => {
  // USDA FSIS: a refrigerator keeps food 4 h with the door shut; "no more than 4 hours".
  it('calls it lost at four hours exactly, and not a millisecond before', () => {
    const clock = thawClock(fresh(), lossUntil());
    expect(clock.saveByAt).toBe(LOST_AT + 4 * HOUR_MS);
    expect(compartmentState(clock, lossUntil(), at(4) - 1)).toBe('at-risk');
    expect(compartmentState(clock, lossUntil(), at(4))).toBe('lost');
  });

  it('counts as at risk from the start when it was at 40 F before', () => {
    expect(hoursFor(fresh({ beforeF: 40 }))).toEqual({ atRisk: 0, lost: 4 });
  });

  it('takes a late cold reading for no extension of the four hours', () => {
    const facts = fresh({ readings: [reading(3.5, 39), reading(3.8, 44)] });
    expect(hoursFor(facts)).toEqual({ atRisk: 3, lost: 4 });
  });

  it('keeps the first warm spell when it was cold in between', () => {
    const facts = fresh({ readings: [reading(1, 44), reading(1.5, 39), reading(1.8, 44)] });
    expect(hoursFor(facts)).toEqual({ atRisk: 0, lost: 2 });
  });

  it('does not take exactly 40 F for warm', () => {
    expect(hoursFor(fresh({ readings: [reading(1, 40)] }))).toEqual({ atRisk: 3, lost: 4 });
  });

  it('forgets a warm reading from before the loss when a cold one followed it', () => {
    expect(hoursFor(fresh({ readings: [reading(-3, 44), reading(-1, 38)] })).lost).toBe(4);
  });

  it('counts from a warm reading just before the loss', () => {
    expect(hoursFor(fresh({ readings: [reading(-1, 44)] }))).toEqual({ atRisk: 0, lost: 1 });
  });

  it('takes the stricter of an open door and a warm reading', () => {
    const facts = fresh({
      standingOpenSince: at(1),
      readings: [reading(0.5, 38), reading(1.5, 44)],
    });
    expect(hoursFor(facts)).toEqual({ atRisk: 0.5, lost: 2.5 });
  });

  it('applies the one-hour rule above 90 F and not at 90 F or in an unknown room', () => {
    const open = (roomF: number | null) => fresh({ roomF, standingOpenSince: at(1) });
    expect(hoursFor(open(90)).lost).toBe(3);
    expect(hoursFor(open(null)).lost).toBe(3);
    expect(hoursFor(open(91)).lost).toBe(2);
  });

  it('names the published limit and its source in words', () => {
    expect(thawClock(fresh({ beforeF: 37 }), lossUntil()).reasons).toEqual([
      'Refrigerator, door shut: published limit 4 h (USDA FSIS)',
    ]);
  });

  it('labels what is our estimate', () => {
    const { reasons } = thawClock(aCompartment('fresh-food'), lossUntil());
    expect(reasons[1]).toBe(
      'At risk from 1.3 h: room not known, 90 F assumed, ' +
        'door use not known, counted as opened many times (our estimate)',
    );
  });
});

describe('thawClock for a freezer', () => {
  // USDA FSIS, FDA: 48 h full, 24 h half full, door shut.
  it.each([
    { fill: 1, lost: 48 },
    { fill: 0.95, lost: 48 },
    { fill: 0.94, lost: 24 },
    { fill: 0.5, lost: 24 },
    { fill: 0.4, lost: 19.2 },
    { fill: 0.05, lost: 4 },
    { fill: 0, lost: 4 },
  ])('gives $lost h at a fill of $fill', ({ fill, lost }) => {
    expect(hoursFor(fullFreezer({ fill })).lost).toBeCloseTo(lost, 9);
  });

  it('leaves two hours from the last cold reading before a warm one', () => {
    const facts = fullFreezer({ readings: [reading(10, 39), reading(11, 43)] });
    expect(hoursFor(facts)).toEqual({ atRisk: 9, lost: 12 });
  });

  it('gives half full, dry ice and a shut lid three quarters of the ice time', () => {
    const ice = { at: at(10), pounds: 25, cubicFeet: 9 };
    const facts = fullFreezer({ fill: 0.5, dryIce: [ice] });
    expect(hoursFor(facts)).toEqual({ atRisk: 28, lost: 34 });
  });

  it('gives half the pounds half the hours', () => {
    const ice = { at: at(40), pounds: 25, cubicFeet: 18 };
    expect(hoursFor(fullFreezer({ dryIce: [ice] })).lost).toBe(64);
  });

  it('lets ice that came too late revive nothing', () => {
    const ice = { at: at(48), pounds: 50, cubicFeet: 18 };
    expect(hoursFor(fullFreezer({ dryIce: [ice] })).lost).toBe(48);
  });

  it('lets a little ice early shorten nothing', () => {
    const ice = { at: at(1), pounds: 5, cubicFeet: 18 };
    expect(hoursFor(fullFreezer({ dryIce: [ice] }))).toEqual({ atRisk: 36, lost: 48 });
  });

  it('does not let ice outlast a thermometer that showed it warm afterwards', () => {
    const facts = fullFreezer({
      dryIce: [{ at: at(5), pounds: 50, cubicFeet: 18 }],
      readings: [reading(20, 38), reading(21, 45)],
    });
    expect(hoursFor(facts).lost).toBe(22);
  });

  it('takes 40 F or below at a look inside as it takes ice crystals', () => {
    const facts = fullFreezer({ inspections: [{ at: at(50), finding: 'at-or-below-40' }] });
    expect(hoursFor(facts)).toEqual({ atRisk: 36, lost: 52 });
    expect(stateAfter(facts, 51)).toBe('at-risk');
    expect(stateAfter(facts, 52)).toBe('lost');
  });

  it('takes "thawed" at a look inside as a warm reading', () => {
    const facts = fullFreezer({ inspections: [{ at: at(20), finding: 'thawed' }] });
    expect(stateAfter(facts, 20)).toBe('lost');
  });

  it('says the fill and the source in words', () => {
    const reasonsAt = (fill: number | null) =>
      thawClock(fullFreezer({ fill }), lossUntil()).reasons[0];
    expect(reasonsAt(0.5)).toBe('Half-full freezer, door shut: published limit 24 h (USDA FSIS)');
    expect(reasonsAt(0.25)).toBe(
      '25 % full freezer, door shut: 12 h, in proportion to the published 48 h of a full one ' +
        '(our estimate)',
    );
  });
});

describe('thawClock for medicine', () => {
  it('never declares a vaccine or injectable lost, however long and whatever comes back', () => {
    const facts = aMedicine({ kind: 'injectable' });
    expect(hoursFor(facts)).toEqual({ atRisk: 0, lost: null });
    expect(stateAfter(facts, 10_000)).toBe('at-risk');
    expect(stateAfter(facts, 10_000, 5)).toBe('at-risk');
  });

  // FDA, "Information Regarding Insulin Storage...": do not use insulin that has been frozen.
  it('says at once to replace insulin that froze', () => {
    const facts = aMedicine({ kind: 'insulin', frozen: true }, { roomF: 70 });
    const clock = thawClock(facts, lossUntil());
    expect(hoursFor(facts)).toEqual({ atRisk: 0, lost: 0 });
    expect(stateInWords(clock, compartmentState(clock, lossUntil(), LOST_AT))).toBe('Replace');
  });

  it('keeps the 28 days at 86 F, and counts a day above it or in an unknown room', () => {
    const insulin = (roomF: number | null) => hoursFor(aMedicine({ kind: 'insulin' }, { roomF }));
    expect(insulin(86)).toEqual({ atRisk: 504, lost: 672 });
    expect(insulin(87)).toEqual({ atRisk: 0, lost: 24 });
    expect(insulin(null)).toEqual({ atRisk: 0, lost: 24 });
  });

  it('gives insulin that used up its 28 days nothing more, hot or not', () => {
    const used = (roomF: number) =>
      hoursFor(aMedicine({ kind: 'insulin', hoursAlreadyUnrefrigerated: 700 }, { roomF }));
    expect(used(75)).toEqual({ atRisk: 0, lost: 0 });
    expect(used(95)).toEqual({ atRisk: 0, lost: 0 });
  });

  it('follows the label up to its temperature', () => {
    const label = (roomF: number | null, labelHours = 48) =>
      hoursFor(aMedicine({ kind: 'labelled', labelHours, labelMaxF: 77 }, { roomF }));
    expect(label(77)).toEqual({ atRisk: 36, lost: 48 });
    expect(label(78)).toEqual({ atRisk: 0, lost: 24 });
    expect(label(null)).toEqual({ atRisk: 0, lost: 24 });
    expect(label(90, 6)).toEqual({ atRisk: 0, lost: 6 });
  });

  it('counts a label whose hours nobody read as a label not read', () => {
    const facts = aMedicine({ kind: 'labelled', labelMaxF: 77 }, { roomF: 70 });
    expect(hoursFor(facts)).toEqual({ atRisk: 2, lost: 24 });
  });

  it('treats "rather not say" as a label not read', () => {
    expect(hoursFor(aMedicine({ kind: 'rather-not-say' }))).toEqual({ atRisk: 2, lost: 24 });
    expect(hoursFor(aCompartment('medicine'))).toEqual({ atRisk: 2, lost: 24 });
  });

  it('gives milk and formula the refrigerator clock with an eye on it from two hours', () => {
    const milk = (known: Partial<CompartmentFacts>) =>
      hoursFor(aMedicine({ kind: 'milk-or-formula' }, known));
    expect(milk(shut72)).toEqual({ atRisk: 2, lost: 4 });
    expect(milk({})).toEqual({ atRisk: 1.28, lost: 4 });
  });

  it('gives frozen milk the freezer clock, ice crystals included', () => {
    const milk = aMedicine(
      { kind: 'frozen-milk' },
      { ...shut72, fill: 1, inspections: [{ at: at(50), finding: 'ice-crystals' }] },
    );
    expect(hoursFor(milk)).toEqual({ atRisk: 36, lost: 52 });
  });

  it('never says that medicine is lost, only that it is to be replaced', () => {
    const milk = thawClock(aMedicine({ kind: 'milk-or-formula' }), lossUntil());
    expect(stateInWords(milk, 'lost')).toBe('Replace');
    expect(stateInWords(thawClock(fresh(), lossUntil()), 'lost')).toBe('Lost');
  });
});

describe('thawClock for commercial stock', () => {
  // San Francisco DPH: above 50 F never sold; 46-50 F not sold once 4 h have passed.
  it('ends with a reading above 50 F, whatever came after', () => {
    expect(hoursFor(stock({ readings: [reading(1, 51), reading(2, 40)] }))).toEqual({
      atRisk: 1,
      lost: 1,
    });
  });

  it('ends with 46 to 50 F from four hours on, and not before', () => {
    const log = (hours: number) =>
      hoursFor(stock({ readings: [reading(2, 40), reading(hours, 48)] }));
    expect(log(3.5)).toEqual({ atRisk: 3.5, lost: 6 });
    expect(log(4.5)).toEqual({ atRisk: 4, lost: 4.5 });
  });

  it('holds the Food Code limit of 41 F apart from the consumer limit of 40 F', () => {
    expect(hoursFor(stock({ readings: [reading(3, 41)] })).lost).toBe(7);
    expect(hoursFor(stock({ readings: [reading(3, 41.5)] }))).toEqual({ atRisk: 2, lost: 4 });
  });

  it('counts an unknown start as not cold, and lets a logged reading mend it', () => {
    expect(hoursFor(stock({ coldAtLoss: null }))).toEqual({ atRisk: 0, lost: 2 });
    expect(hoursFor(stock({ coldAtLoss: null, readings: [reading(1, 40)] }))).toEqual({
      atRisk: 3,
      lost: 5,
    });
  });

  it('counts from the last good reading before the loss when nobody vouches for the loss', () => {
    const log = (readings: Reading[]) => hoursFor(stock({ coldAtLoss: null, readings }));
    expect(log([reading(-0.5, 40)])).toEqual({ atRisk: 1.5, lost: 3.5 });
    expect(log([reading(-6, 40)])).toEqual({ atRisk: 0, lost: 2 });
    expect(log([reading(-0.5, 40), reading(-0.25, 44)])).toEqual({ atRisk: 0, lost: 2 });
  });

  it('flags the notice to the health authority from two hours', () => {
    expect(thawClock(stock(), lossUntil()).noticeAt).toBe(at(2));
    expect(thawClock(fresh(), lossUntil()).noticeAt).toBeNull();
  });
});

describe('when cooling comes back', () => {
  it('saves what came back before save-by, and nothing at save-by or after', () => {
    const clock = thawClock(fresh(), lossUntil());
    expect(savedBy(clock, at(4) - 1)).toBe(true);
    expect(savedBy(clock, at(4))).toBe(false);
  });

  it('stops the clock: recovering, long after the limit would have passed', () => {
    expect(stateAfter(fresh(), 9, 3.5)).toBe('recovering');
    expect(stateAfter(fresh(), 3, 3.5)).toBe('at-risk');
  });

  it('leaves lost what was lost before', () => {
    expect(stateAfter(fresh(), 4.5, 4.25)).toBe('lost');
  });

  it('holds a refrigerator to 40 F before it is fine again', () => {
    const facts = fresh({ readings: [reading(5, 40)] });
    expect(stateAfter(facts, 4.9, 3.5)).toBe('recovering');
    expect(stateAfter(facts, 5, 3.5)).toBe('still-safe');
  });

  it('holds a freezer to solid or ice crystals', () => {
    const back = 30;
    const cold = fullFreezer({ readings: [reading(31, 38)] });
    const solid = fullFreezer({ readings: [reading(31, 38), reading(33, 30)] });
    const crystals = fullFreezer({ inspections: [{ at: at(32), finding: 'ice-crystals' }] });
    expect(stateAfter(cold, 40, back)).toBe('recovering');
    expect(stateAfter(solid, 40, back)).toBe('still-safe');
    expect(stateAfter(crystals, 40, back)).toBe('still-safe');
  });

  it('calls lost what a thermometer found warm for over two hours after the repair', () => {
    const facts = fresh({ readings: [reading(3.4, 39), reading(4.5, 42), reading(6, 41)] });
    expect(stateAfter(facts, 6, 3.5)).toBe('lost');
    expect(savedBy(thawClock(facts, lossUntil(3.5)), at(3.5))).toBe(false);
  });

  it('does not hold a warm reading of another day against contents that had recovered', () => {
    const facts = fresh({ readings: [reading(4, 38), reading(30, 50)] });
    expect(stateAfter(facts, 31, 3.5)).toBe('still-safe');
  });

  it('calls lost stock that reads above 50 F after the repair', () => {
    expect(stateAfter(stock({ readings: [reading(3.5, 52)] }), 5, 3)).toBe('lost');
  });
});

describe('ADVICE', () => {
  it.each(ADVICE_KEYS)('on %s promises nothing and names its source', (key) => {
    const { words, source } = ADVICE[key];
    expect(words).not.toMatch(/is safe|safe to eat|spoiled|guarantee|smell/i);
    expect(source.length).toBeGreaterThan(10);
  });

  it.each([
    'insulin',
    'insulin-hot',
    'insulin-frozen',
    'label',
    'read-label',
    'medicine-quarantine',
  ] as const)('on %s sends people to the pharmacist and never says "throw away"', (key) => {
    expect(ADVICE[key].words).toMatch(/pharmacist/);
    expect(ADVICE[key].words).not.toMatch(/throw/i);
  });
});
