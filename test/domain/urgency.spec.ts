import fc from 'fast-check';
import type { CompartmentFacts } from '@shared/domain/cold-unit';
import { DEFAULT_VALUES, usualValueCents } from '@shared/domain/food-value';
import { thawClock } from '@shared/domain/thaw/thaw-clock';
import {
  byUrgency,
  DEFAULT_WEIGHTS,
  minutesInWords,
  savableBy,
  urgency,
  type CompartmentOnClock,
  type Urgency,
} from '@shared/domain/urgency';
import { aCompartment, aMedicine, at, lossUntil } from './thaw-facts';

const shut72 = { door: 'shut', roomF: 72 } as const;
const food = (valueCents = 150_00) => aCompartment('fresh-food', { ...shut72, valueCents });
const freezer = (valueCents = 200_00, fill = 1) =>
  aCompartment('freezer', { ...shut72, fill, valueCents });
const insulin = (roomF: number) => aMedicine({ kind: 'insulin' }, { roomF, valueCents: 100_00 });
const stock = (valueCents = 4_000_00) =>
  aCompartment('commercial-stock', { coldAtLoss: true, valueCents });

const onClocks = (...facts: CompartmentFacts[]): CompartmentOnClock[] =>
  facts.map((known) => ({ facts: known, clock: thawClock(known, lossUntil()) }));

const urgencyAfter = (hours: number, ...facts: CompartmentFacts[]): Urgency =>
  urgency(onClocks(...facts), lossUntil(), at(hours));

describe('urgency', () => {
  it('spreads the value of what is live over the minutes that it has left', () => {
    // $150 over the 120 minutes to 4 h, as phone advice helps now; and $200 over the 2,700 minutes
    // from when somebody could be there, in an hour, to 48 h.
    const { lossPerMinuteCents, valueAtRiskCents } = urgencyAfter(2, food(), freezer());
    expect(lossPerMinuteCents).toBeCloseTo(15_000 / 120 + 20_000 / 2_700, 9);
    expect(valueAtRiskCents).toBe(350_00);
  });

  it('gives the next save-by, the minutes to it and the reasons in words', () => {
    expect(urgencyAfter(3, food(), freezer())).toMatchObject({
      slackMinutes: 60,
      saveByAt: at(4),
      atRiskAt: at(3),
      reasons: [
        'Fresh food at risk: 1 h left, $150',
        'Freezer: likely 39 h left, 45 h to the limit, $200',
      ],
    });
  });

  it('tells first what decides the place of the call, in whatever order the units were named', () => {
    const facts = [freezer(), insulin(95), food()];
    const told = urgencyAfter(1, ...facts).reasons.map((reason) => reason.split(/ at risk|:/)[0]);
    expect(told).toEqual(['Medicine', 'Fresh food', 'Freezer']);
    expect(urgencyAfter(1, ...facts.reverse()).reasons).toHaveLength(3);
    expect(urgencyAfter(1, ...facts).reasons[0]).toMatch(/^Medicine at risk/);
  });

  it('gives a compartment at or past its save-by no urgency at all', () => {
    expect(urgencyAfter(4, food(), freezer())).toEqual(urgencyAfter(4, freezer()));
    expect(urgencyAfter(48, food(), freezer())).toEqual({
      lane: 4,
      lossPerMinuteCents: 0,
      slackMinutes: null,
      saveByAt: null,
      atRiskAt: null,
      valueAtRiskCents: 0,
      reasons: ['Nothing left to save: an ordinary repair'],
    });
  });

  it('gives none to what is cooling again, and none to an empty compartment', () => {
    const call = onClocks(food(), freezer());
    expect(urgency(call, lossUntil(2), at(3)).lane).toBe(4);
    expect(urgency(call, lossUntil(2), at(1)).lane).toBe(2);
    expect(urgencyAfter(1, food(0)).lane).toBe(4);
  });

  it('counts medicine more, by a weight that can be set', () => {
    const call = onClocks(insulin(92));
    const withWeight = (medicine: number) =>
      urgency(call, lossUntil(), at(12), { weights: { medicine, household: 1 } })
        .lossPerMinuteCents;
    expect(withWeight(1)).toBeCloseTo(10_000 / 720, 9);
    expect(withWeight(3)).toBeCloseTo(3 * withWeight(1), 9);
    expect(urgency(call, lossUntil(), at(12)).lossPerMinuteCents).toBeCloseTo(
      withWeight(DEFAULT_WEIGHTS.medicine),
      9,
    );
  });

  it('counts more in a household that can do less without, by a weight that can be set', () => {
    const call = onClocks(food(), insulin(92));
    const told = (householdAtRisk: boolean) =>
      urgency(call, lossUntil(), at(1), {
        weights: { medicine: 5, household: 3 },
        householdAtRisk,
      });
    expect(told(true).lossPerMinuteCents).toBeCloseTo(3 * told(false).lossPerMinuteCents, 9);
    expect(told(true).valueAtRiskCents).toBe(told(false).valueAtRiskCents);
    expect(told(true).reasons.at(-1)).toBe('A household that can do less without');
  });

  it('weighs a freezer around the moment when somebody could be there, and food at once', () => {
    const at20 = (facts: CompartmentFacts, hours: number) =>
      urgency(onClocks(facts), lossUntil(), at(20), { couldBeThere: at(20 + hours) });
    // Half full, shut, 72 F: 4 h to the published 24 h, of which a visit in 3 h leaves one; likely
    // passed at 22.6 h, so twice the even rate.
    expect(at20(freezer(200_00, 0.5), 3).lossPerMinuteCents).toBeCloseTo((2 * 20_000) / 60, 6);
    expect(at20(freezer(200_00, 0.5), 0).lossPerMinuteCents).toBeLessThan(20_000 / 60);
    const phone = (hours: number) =>
      urgency(onClocks(food()), lossUntil(), at(1), { couldBeThere: at(1 + hours) });
    expect(phone(5)).toEqual(phone(0));
  });

  it('says it when no visit could be there before the limit, and does not hide it in the number', () => {
    const call = onClocks(freezer(200_00, 0.5));
    const told = urgency(call, lossUntil(), at(23.5), { couldBeThere: at(24.5) });
    expect(told.reasons).toEqual([
      'Freezer at risk: likely warm already, 30 min left to the limit, no visit could be there before, $200',
    ]);
    expect(told.lossPerMinuteCents).toBe(2_000);
  });

  it('spreads the value over ten minutes at least, so that the last second outranks nothing', () => {
    expect(urgencyAfter(4 - 1 / 3600, food()).lossPerMinuteCents).toBe(1_500);
  });

  it('keeps a vaccine in the first lane without inventing a save-by', () => {
    expect(urgencyAfter(100, aMedicine({ kind: 'injectable' }))).toMatchObject({
      lane: 1,
      slackMinutes: null,
      saveByAt: null,
      reasons: ['Medicine at risk: set apart, ask the pharmacist, $200'],
    });
  });
});

describe('the lanes', () => {
  it.each([
    { lane: 1, what: 'medicine at risk', call: [insulin(92), freezer()] },
    {
      lane: 1,
      what: 'medicine of unknown price at risk',
      call: [{ ...insulin(92), valueCents: 0 }],
    },
    { lane: 2, what: 'fresh food', call: [food(), freezer()] },
    { lane: 2, what: 'a kitchen', call: [stock()] },
    { lane: 3, what: 'a freezer alone', call: [freezer()] },
    { lane: 3, what: 'insulin that keeps for weeks', call: [insulin(78)] },
  ])('put $what into lane $lane', ({ lane, call }) => {
    expect(urgencyAfter(1, ...call).lane).toBe(lane);
  });

  it('move a fridge-freezer from phone to visit when its fresh food is lost, then to repair', () => {
    const laneAfter = (hours: number) => urgencyAfter(hours, food(), freezer()).lane;
    expect([3.9, 4, 47.9, 48].map(laneAfter)).toEqual([2, 3, 3, 4]);
  });
});

describe('byUrgency', () => {
  it('orders by lane, then by loss per minute, then by the earlier save-by', () => {
    const medicine = urgencyAfter(3, insulin(92));
    const kitchen = urgencyAfter(3, stock());
    const kitchenFood = urgencyAfter(3, food());
    const chest = urgencyAfter(3, freezer(400_00));
    const half = urgencyAfter(3, freezer(200_00, 0.5));
    const gone = urgencyAfter(60, freezer());
    const sorted = [gone, chest, kitchenFood, half, medicine, kitchen].sort(byUrgency);
    expect(sorted).toEqual([medicine, kitchen, kitchenFood, half, chest, gone]);
  });

  it('lets more lost per minute outrank an earlier save-by in the same lane', () => {
    const small = urgencyAfter(3, freezer(50_00, 0.5));
    const large = urgencyAfter(3, freezer(4_000_00));
    expect([small, large].sort(byUrgency)).toEqual([large, small]);
  });

  it('puts the earlier save-by first among equals, and no save-by last', () => {
    const base = urgencyAfter(3, freezer());
    const later = { ...base, saveByAt: at(49) };
    const none = { ...base, saveByAt: null };
    expect([none, later, base].sort(byUrgency)).toEqual([base, later, none]);
  });

  it('is an order: antisymmetric, and never NaN', () => {
    const someUrgency = fc
      .tuple(aCall, fc.integer({ min: 0, max: 3_000 }))
      .map(([call, minutes]) => urgencyAfter(minutes / 60, ...call));
    fc.assert(
      fc.property(someUrgency, someUrgency, (a, b) => {
        expect(Math.sign(byUrgency(a, b)) + Math.sign(byUrgency(b, a))).toBe(0);
      }),
    );
  });
});

describe('savableBy', () => {
  it('counts what a visit still reaches, strictly before save-by', () => {
    const call = onClocks(food(), freezer());
    const saved = (hours: number) => savableBy(call, lossUntil(), at(hours));
    expect([3.9, 4, 47.9, 48].map(saved)).toEqual([350_00, 200_00, 200_00, 0]);
  });

  it('leaves nothing to the visit when cooling came back before it', () => {
    expect(savableBy(onClocks(food()), lossUntil(2), at(3))).toBe(0);
  });

  // One technician, four jobs (hours, due, $): A (2, 3, 150), B (2, 4, 350), C (1, 4, 200),
  // D (3, 6, 400). By brute force at most three end in time, and the best value is 950 with B, C, D.
  it('finds the best order of a small night as known by brute force', () => {
    const job = (name: string, lasts: number, due: number, dollars: number) => {
      const facts = food(dollars * 100);
      const clock = { ...thawClock(facts, lossUntil()), saveByAt: at(due) };
      return { name, lasts, call: [{ facts, clock }] };
    };
    const jobs = [
      job('A', 2, 3, 150),
      job('B', 2, 4, 350),
      job('C', 1, 4, 200),
      job('D', 3, 6, 400),
    ];
    const best = { cents: 0, jobs: '', most: 0 };
    for (const order of ordersOf(jobs)) {
      let t = 0;
      let cents = 0;
      let saved = '';
      for (const { name, lasts, call } of order) {
        t += lasts;
        // "Due at 3" is met at 3: a minute before save-by.
        const value = savableBy(call, lossUntil(), at(t) - 60_000);
        cents += value;
        if (value > 0) saved += name;
      }
      best.most = Math.max(best.most, saved.length);
      if (cents > best.cents) Object.assign(best, { cents, jobs: [...saved].sort().join('') });
    }
    expect(best).toEqual({ cents: 950_00, jobs: 'BCD', most: 3 });
  });
});

describe('urgency as the night goes on', () => {
  const minutes = fc.integer({ min: 0, max: 3_000 });

  it('never falls before the next save-by, and never rises by what is past it', () => {
    fc.assert(
      fc.property(aCall, minutes, fc.integer({ min: 0, max: 600 }), (call, t, more) => {
        const before = urgencyAfter(t / 60, ...call);
        const after = urgencyAfter((t + more) / 60, ...call);
        fc.pre(before.saveByAt !== null && at((t + more) / 60) < before.saveByAt);
        expect(after.lossPerMinuteCents).toBeGreaterThanOrEqual(before.lossPerMinuteCents - 1e-9);
        expect(after.lane).toBeLessThanOrEqual(before.lane);
      }),
    );
  });

  it('is that of the live compartments alone', () => {
    fc.assert(
      fc.property(aCall, minutes, (call, t) => {
        const live = call.filter((facts) => {
          const { saveByAt } = thawClock(facts, lossUntil());
          return saveByAt === null || at(t / 60) < saveByAt;
        });
        expect(urgencyAfter(t / 60, ...call)).toEqual(urgencyAfter(t / 60, ...live));
      }),
    );
  });

  it('stays at nothing once it is nothing', () => {
    fc.assert(
      fc.property(aCall, minutes, minutes, (call, t, more) => {
        fc.pre(urgencyAfter(t / 60, ...call).lane === 4);
        expect(urgencyAfter((t + more) / 60, ...call).lossPerMinuteCents).toBe(0);
      }),
    );
  });

  it('is never lower for more value', () => {
    fc.assert(
      fc.property(aCall, minutes, fc.nat(100_000), (call, t, cents) => {
        const richer = call.map((facts) => ({ ...facts, valueCents: facts.valueCents + cents }));
        const [poor, rich] = [urgencyAfter(t / 60, ...call), urgencyAfter(t / 60, ...richer)];
        expect(rich.lossPerMinuteCents).toBeGreaterThanOrEqual(poor.lossPerMinuteCents);
        expect(rich.lane).toBeLessThanOrEqual(poor.lane);
      }),
    );
  });

  it('is never lower for a hotter room or less in the freezer, while nothing is lost by it', () => {
    fc.assert(
      fc.property(aCall, minutes, fc.nat(40), fc.nat(100), (call, t, hotter, emptier) => {
        const worse = call.map((facts) => ({
          ...facts,
          roomF: (facts.roomF ?? 90) + hotter,
          fill: facts.fill === null ? null : Math.max(0, facts.fill - emptier / 100),
        }));
        const [mild, hot] = [urgencyAfter(t / 60, ...call), urgencyAfter(t / 60, ...worse)];
        fc.pre(hot.reasons.length === mild.reasons.length && (hot.lane < 4 || mild.lane === 4));
        expect(hot.lossPerMinuteCents).toBeGreaterThanOrEqual(mild.lossPerMinuteCents - 1e-9);
        expect(hot.lane).toBeLessThanOrEqual(mild.lane);
      }),
    );
  });
});

describe('minutesInWords', () => {
  it.each([
    [0.5, '0 min'],
    [25.9, '25 min'],
    [65, '1 h 05 min'],
    [120, '2 h'],
    [2_520, '42 h'],
    [39_000, '27 days'],
  ])('says %d minutes as %s, never more than there are', (minutes, words) => {
    expect(minutesInWords(minutes)).toBe(words);
  });
});

describe('usualValueCents', () => {
  const chest = { kind: 'chest-freezer', cubicFeet: null } as const;
  const freezerOf = (fill: number | null) => ({ kind: 'freezer', fill }) as const;

  it('values a freezer that stands alone above a freezer section', () => {
    const section = { kind: 'fridge-freezer', cubicFeet: null } as const;
    expect(usualValueCents(section, freezerOf(null))).toBe(200_00);
    expect(usualValueCents(chest, freezerOf(null))).toBe(400_00);
    expect(usualValueCents({ kind: 'walk-in', cubicFeet: null }, stock())).toBe(4_000_00);
  });

  it('takes what the manager has set, to the dollar', () => {
    const values = { ...DEFAULT_VALUES, valueChestFreezer: 612 };
    expect(usualValueCents(chest, freezerOf(null), values)).toBe(612_00);
  });

  it('goes with the size of the unit and with how full it is, in whole five dollars', () => {
    expect(usualValueCents(chest, freezerOf(1))).toBe(535_00); // 400 / 0.75
    expect(usualValueCents(chest, freezerOf(0.25))).toBe(135_00);
    expect(usualValueCents({ ...chest, cubicFeet: 7.5 }, freezerOf(null))).toBe(200_00);
  });

  it('does not count medicine by the foot', () => {
    const small = { kind: 'medicine-fridge', cubicFeet: 1 } as const;
    expect(usualValueCents(small, { kind: 'medicine', fill: null })).toBe(300_00);
  });

  it('is never less for more', () => {
    fc.assert(
      fc.property(fc.nat(100), fc.nat(100), fc.nat(60), fc.nat(60), (a, b, size, more) => {
        const value = (fill: number, cubicFeet: number) =>
          usualValueCents({ kind: 'upright-freezer', cubicFeet }, freezerOf(fill / 100));
        expect(value(Math.max(a, b), size + more)).toBeGreaterThanOrEqual(
          value(Math.min(a, b), size),
        );
      }),
    );
  });
});

const someFacts: fc.Arbitrary<CompartmentFacts> = fc
  .record({
    kind: fc.constantFrom('fresh-food', 'freezer', 'medicine', 'commercial-stock'),
    fill: fc.option(fc.nat(100).map((percent) => percent / 100)),
    roomF: fc.option(fc.integer({ min: 50, max: 110 })),
    door: fc.constantFrom('shut', 'few', 'many', 'unknown'),
    valueCents: fc.nat(500_000),
    coldAtLoss: fc.option(fc.boolean()),
    medicine: fc.constantFrom('insulin', 'label-not-read', 'injectable', 'milk-or-formula'),
  } as const)
  .map(({ kind, medicine, ...known }) =>
    kind === 'medicine' ? aMedicine({ kind: medicine }, known) : aCompartment(kind, known),
  );

const aCall: fc.Arbitrary<CompartmentFacts[]> = fc.array(someFacts, { minLength: 1, maxLength: 4 });

function* ordersOf<T>(items: readonly T[]): Generator<T[]> {
  if (items.length === 0) yield [];
  for (const [i, first] of items.entries()) {
    for (const rest of ordersOf(items.filter((_, j) => j !== i))) yield [first, ...rest];
  }
}
