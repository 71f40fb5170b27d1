import fc from 'fast-check';
import { bandOf, momentBandOf } from '@shared/domain/forecast/band';
import { crewOf, NO_CHANGE } from '@shared/domain/forecast/crew-change';
import { Draws } from '@shared/domain/forecast/draws';
import type { ForecastFacts } from '@shared/domain/forecast/facts';
import { forecast } from '@shared/domain/forecast/forecast';
import { nthLargest } from '@shared/domain/forecast/nth-largest';
import { RingClock } from '@shared/domain/forecast/ring-clock';
import { seenOf, visitTimes } from '@shared/domain/forecast/seen';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { holdAgainst } from '../support/coverage';
import { factsOf } from '../support/storm-seen';
import { TrueStorm } from '../support/storm-truth';

const NOON: Instant = Date.UTC(2031, 8, 14, 12);
const at = (hours: number): Instant => NOON + hours * HOUR_MS;

/** Some calls that wait for a visit, and nothing else: none to come, and every visit mends. */
function still(told: Partial<ForecastFacts> & { readonly waiting?: never } = {}): ForecastFacts {
  const call = {
    receivedAt: at(-1),
    stage: 'visit',
    checkingSince: null,
    compartments: [{ valueCents: 10_000, saveByAt: at(200), isMedicine: false }],
    skills: 0,
    parts: [],
  } as const;
  return {
    now: NOON,
    since: at(-400),
    zoneOffsetMs: 0,
    calls: [call, call, call, call, call, call],
    patterns: [{ compartments: [], skills: 0, parts: [], weight: 1 }],
    stillToLose: [],
    areas: [],
    otherRingsAt: [],
    technicians: [
      {
        id: 'a',
        shifts: [{ startsAt: at(-4), endsAt: at(24) }],
        skills: 7,
        van: [],
        route: [],
        underWay: null,
      },
    ],
    phone: {
      staff: 2,
      settledRunning: 0,
      settledOtherwise: 0,
      toVisit: 0,
      handleMinutes: [],
    },
    visits: {
      usualServiceMinutes: 45,
      usualDriveMinutes: 15,
      // So many that nothing is in doubt.
      serviceMinutes: new Array<number>(4000).fill(45),
      driveMinutes: new Array<number>(4000).fill(15),
      restored: 4000,
      settledOtherwise: 0,
      noAccess: 0,
      partsOnOrder: 0,
    },
    waiting: { ended: 0, hours: 100_000 },
    hasVanStock: true,
    ...told,
  };
}

describe('a forecast without doubt', () => {
  it('is what one counts on one’s fingers: six visits of an hour', () => {
    const { emptyAt } = forecast(still(), { seed: 1, futures: 40 }).asItIs;
    // Odd calls of a stream that has all but dried up make a little difference.
    expect((emptyAt.middle! - NOON) / HOUR_MS).toBeGreaterThan(5.9);
    expect((emptyAt.middle! - NOON) / HOUR_MS).toBeLessThan(6.4);
  });

  it('waits for the morning when the shift is over', () => {
    const facts = still();
    const [technician] = facts.technicians;
    const shifts = [
      { startsAt: at(-4), endsAt: at(3) },
      { startsAt: at(20), endsAt: at(30) },
    ];
    const { emptyAt } = forecast(
      { ...facts, technicians: [{ ...technician!, shifts }] },
      { seed: 1, futures: 40 },
    ).asItIs;
    expect((emptyAt.middle! - NOON) / HOUR_MS).toBeGreaterThan(22.9);
    expect((emptyAt.middle! - NOON) / HOUR_MS).toBeLessThan(23.5);
  });

  it('counts what routes count at the doors: more units, and who takes longer', () => {
    const facts = still();
    const [call, ...others] = facts.calls;
    const [technician] = facts.technicians;
    const hours = (change: Partial<ForecastFacts>): number => {
      const { emptyAt } = forecast({ ...facts, ...change }, { seed: 1, futures: 40 }).asItIs;
      return (emptyAt.middle! - NOON) / HOUR_MS;
    };
    const plain = hours({});
    // Of the hour, three quarters are work.
    expect(hours({ calls: [{ ...call!, workTimes: 3 }, ...others] }) - plain).toBeCloseTo(1.5, 0);
    expect(hours({ technicians: [{ ...technician!, pace: 1.5 }] }) - plain).toBeCloseTo(2.25, 0);
  });

  it('fetches at the store what a van lacks, in place of waiting for it', () => {
    const facts = still();
    const calls = facts.calls.map((call) => ({ ...call, parts: [[0, 1]] as const }));
    const openAtTheEnd = (store?: ForecastFacts['store']): number => {
      const told = { ...facts, calls, ...(store ? { store } : {}) };
      return forecast(told, { seed: 1, futures: 40 }).asItIs.curve.at(-1)!.open.middle;
    };
    expect(openAtTheEnd()).toBeGreaterThan(2);
    expect(openAtTheEnd({ minutes: 10 })).toBe(0);
  });

  it('counts the breaks of a shift', () => {
    const facts = still();
    const [technician] = facts.technicians;
    const breaks = [{ from: at(1.5), to: at(3), minutes: 60 }];
    const shifts = [{ startsAt: at(-4), endsAt: at(24), breaks }];
    const { emptyAt } = forecast(
      { ...facts, technicians: [{ ...technician!, shifts }] },
      { seed: 1, futures: 40 },
    ).asItIs;
    expect((emptyAt.middle! - NOON) / HOUR_MS).toBeGreaterThan(6.8);
    expect((emptyAt.middle! - NOON) / HOUR_MS).toBeLessThan(7.4);
  });

  it('never empties while nobody works, and says so', () => {
    const { emptyAt, emptyShare } = forecast(still({ technicians: [] }), {
      seed: 1,
      futures: 20,
    }).asItIs;
    expect([emptyAt.low, emptyShare]).toEqual([null, 0]);
  });

  it('leaves a call to those who have the skill for it', () => {
    const facts = still();
    const calls = facts.calls.map((call) => ({ ...call, skills: 2 }));
    const [technician] = facts.technicians;
    const unskilled = { ...technician!, skills: 1 };
    const { emptyShare } = forecast(
      { ...facts, calls, technicians: [unskilled] },
      { seed: 1, futures: 20 },
    ).asItIs;
    expect(emptyShare).toBe(0);
  });

  it('drives a route in force as it stands', () => {
    const urgent = { valueCents: 30_000, saveByAt: at(1.5), isMedicine: true };
    const facts = still();
    const calls = facts.calls.map((call, i) =>
      i === 5 ? { ...call, compartments: [urgent] } : call,
    );
    const [technician] = facts.technicians;
    const lost = (route: number[]) =>
      forecast(
        { ...facts, calls, technicians: [{ ...technician!, route }] },
        { seed: 1, futures: 20 },
      ).asItIs.medicineLost.middle;
    expect(lost([])).toBe(0);
    expect(lost([0, 1, 5])).toBe(1);
  });

  it('parks a call whose part the van lacks, and not where it is on board', () => {
    const facts = still();
    const calls = facts.calls.map((call) => ({ ...call, parts: [[0, 1]] as const }));
    const [technician] = facts.technicians;
    const leftInTheEnd = (van: number[]) =>
      forecast(
        { ...facts, calls, technicians: [{ ...technician!, van }] },
        { seed: 1, futures: 40 },
      ).asItIs.curve.at(-1)!.open.middle;
    expect(leftInTheEnd([9])).toBeLessThanOrEqual(1);
    expect(leftInTheEnd([0])).toBeGreaterThanOrEqual(2);
  });
});

describe('a forecast', () => {
  const storm = new TrueStorm(700);
  storm.runUntil(storm.lookAt);
  const facts = factsOf(storm);

  it('is the same for the same seed and facts', () => {
    const once = forecast(facts, { seed: 3, futures: 20 });
    expect(forecast(facts, { seed: 3, futures: 20 })).toEqual(once);
    expect(forecast(facts, { seed: 4, futures: 20 })).not.toEqual(once);
  });

  it('finds no difference in a change that changes nothing', () => {
    const { difference } = forecast(facts, { seed: 3, futures: 20, change: NO_CHANGE });
    expect(difference).toEqual({
      emptyHours: { low: 0, middle: 0, high: 0 },
      lostCents: { low: 0, middle: 0, high: 0 },
      medicineLost: { low: 0, middle: 0, high: 0 },
      openAtEnd: { low: 0, middle: 0, high: 0 },
      soonerShare: 0,
    });
  });

  it('is empty no later with six technicians more, and never gives more away than there is', () => {
    const { asItIs, changed, difference } = forecast(facts, {
      seed: 3,
      futures: 40,
      change: { ...NO_CHANGE, technicians: 6 },
    });
    expect(difference!.emptyHours.middle).toBeLessThanOrEqual(0);
    expect(difference!.lostCents.middle).toBeLessThanOrEqual(0);
    for (const outlook of [asItIs, changed!])
      for (const { open } of outlook.curve) {
        expect(open.low).toBeLessThanOrEqual(open.middle);
        expect(open.middle).toBeLessThanOrEqual(open.high);
      }
    expect(asItIs.curve[0]!.open.middle).toBe(facts.calls.length);
  });

  it('stops when nobody wants it any more', () => {
    let asked = 0;
    const shouldStop = (): boolean => ++asked > 3;
    expect(() => forecast(facts, { seed: 1, futures: 50, shouldStop })).toThrow('stopped');
    expect(asked).toBe(4);
  });

  it('mostly holds the truth of storms that go on: a small sample of the bench', () => {
    const held = holdAgainst([901, 902, 903, 904, 905, 906], 40);
    expect(held.length).toBeGreaterThanOrEqual(4);
    // Of six with four of five each, fewer than half within come once in sixty.
    const within = held.filter(({ emptyAt }) => emptyAt === 'within').length;
    expect(within).toBeGreaterThanOrEqual(Math.ceil(held.length / 2));
  });
});

describe('crewOf', () => {
  const shift = { startsAt: at(0), endsAt: at(10) };
  const technician = (id: string, route: number[], isUnderWay = false) => ({
    id,
    shifts: [shift, { startsAt: at(24), endsAt: at(34) }],
    skills: 1,
    van: [2],
    route,
    underWay: isUnderWay ? { drivingSince: NOON, atDoorSince: null } : null,
  });
  const facts = still({
    technicians: [technician('a', [0], true), technician('b', [1, 2]), technician('c', [3])],
  });
  const crew = (change: Partial<typeof NO_CHANGE>) => crewOf(facts, { ...NO_CHANGE, ...change });

  it('sends away whoever has least to do and is not at work', () => {
    expect(crew({ technicians: -1 }).technicians.map(({ id }) => id)).toEqual(['a', 'b']);
    expect(crew({ technicians: -9 }).technicians.map(({ id }) => id)).toEqual(['a']);
  });

  it('adds technicians with the shifts of those there are and an empty route', () => {
    const { technicians, known } = crew({ technicians: 2 });
    expect(technicians.slice(3).map(({ route, shifts }) => [route, shifts.length])).toEqual([
      [[], 2],
      [[], 2],
    ]);
    expect(known).toEqual([0, 1, 2, -1, -1]);
  });

  it('lets everybody stay longer, but not into their next shift', () => {
    const [first] = crew({ overtimeHours: 2 }).technicians;
    expect(first!.shifts.map(({ endsAt }) => endsAt)).toEqual([at(12), at(36)]);
    expect(crew({ overtimeHours: 8 }).technicians[0]!.shifts[0]!.endsAt).toBe(at(18));
  });

  it('begins a second shift when the last of the day’s stops', () => {
    const { technicians } = crew({ secondShift: 1 });
    expect(technicians.at(-1)!.shifts).toEqual([
      { startsAt: at(10), endsAt: at(18) },
      { startsAt: at(34), endsAt: at(42) },
    ]);
  });

  it('keeps one person on the phones at least, and fills every van', () => {
    expect(crew({ phoneStaff: -9 }).phoneStaff).toBe(1);
    expect(crew({ partsOnEachVan: 3 }).technicians[0]!.van.slice(0, 2)).toEqual([5, 3]);
  });
});

describe('the ring clock', () => {
  it('tells the moment of every hour that it shows', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 4e12 }),
        fc.integer({ min: -12, max: 14 }),
        (moment, hours) => {
          const clock = new RingClock(hours * HOUR_MS);
          expect(Math.abs(clock.moment(clock.at(moment)) - moment)).toBeLessThan(2);
        },
      ),
    );
  });

  it('counts a day as 24 hours and a night as few', () => {
    const clock = new RingClock(0);
    expect(clock.between(NOON, at(24))).toBeCloseTo(24, 6);
    // From one to five.
    expect(clock.between(at(13), at(17))).toBeLessThan(1);
  });
});

describe('draws', () => {
  const sample = (draw: (draws: Draws) => number) => {
    const draws = new Draws(11);
    const values = Array.from({ length: 20_000 }, () => draw(draws));
    const mean = values.reduce((sum, one) => sum + one, 0) / values.length;
    const variance = values.reduce((sum, one) => sum + (one - mean) ** 2, 0) / values.length;
    return { mean, variance };
  };
  it.each<[string, (draws: Draws) => number, number, number]>([
    ['normal', (draws) => draws.normal(), 0, 1],
    ['exponential', (draws) => draws.exponential(3), 3, 9],
    ['gamma of a small shape', (draws) => draws.gamma(0.5, 2), 0.25, 0.125],
    ['gamma of a large shape', (draws) => draws.gamma(9, 3), 3, 1],
    ['beta', (draws) => draws.beta(2, 6), 0.25, 3 / 16 / 9],
    ['a small count', (draws) => draws.poisson(4), 4, 4],
    ['a large count', (draws) => draws.poisson(300), 300, 300],
  ])('have the mean and variance of their distribution: %s', (_name, draw, mean, variance) => {
    const seen = sample(draw);
    // Five standard errors of 20,000 draws; the variance is rougher.
    expect(Math.abs(seen.mean - mean)).toBeLessThan(5 * Math.sqrt(variance / 20_000));
    expect(seen.variance / variance).toBeGreaterThan(0.9);
    expect(seen.variance / variance).toBeLessThan(1.1);
  });
});

describe('bands', () => {
  it('interpolate as R-7, and never when a tenth never comes', () => {
    expect(bandOf([0, 10, 20, 30, 40, 50, 60, 70, 80, 90, 100])).toEqual({
      low: 10,
      middle: 50,
      high: 90,
    });
    expect(momentBandOf([1, 2, 3, Infinity])).toEqual({ low: 1, middle: 3, high: null });
  });

  it('rest on a selection that finds what sorting finds', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: 0, max: 9 }), { minLength: 1, maxLength: 40 }),
        fc.nat(39),
        (values, n) => {
          const place = (n % values.length) + 1;
          const sorted = [...values].sort((a, b) => b - a);
          expect(nthLargest(Float64Array.from(values), values.length, place)).toBe(
            sorted[place - 1],
          );
        },
      ),
    );
  });
});

describe('what a storm has shown', () => {
  it('is counted from the calls’ histories', () => {
    const seen = seenOf(
      [
        [
          { at: at(-3), from: null, to: 'new', by: 'mara' },
          { at: at(-1), from: 'new', to: 'checking', by: 'mara' },
          { at: at(-1) + 8 * MINUTE_MS, from: 'checking', to: 'waiting', by: 'jonas' },
          { at: at(-0.5), from: 'waiting', to: 'cancelled', by: null },
        ],
        [
          { at: at(-9), from: null, to: 'new', by: 'early' },
          { at: at(-8), from: 'new', to: 'running-again', by: 'early' },
        ],
        [
          { at: at(-6), from: 'travelling', to: 'on-site', by: 'theo' },
          { at: at(-5), from: 'on-site', to: 'parts-on-order', by: 'theo' },
        ],
      ],
      NOON,
    );
    expect(seen.phone).toEqual({
      settledRunning: 1,
      settledOtherwise: 0,
      toVisit: 1,
      handleMinutes: [8],
      people: 2,
    });
    expect(seen.outcomes).toEqual({
      restored: 0,
      settledOtherwise: 0,
      noAccess: 0,
      partsOnOrder: 1,
    });
    expect(seen.waiting.ended).toBe(1);
    expect(seen.waiting.hours).toBeCloseTo(0.5 - 8 / 60, 9);
  });

  it('counts a drive from the end of the visit before, and after a pause from the start', () => {
    const visit = (driving: number, arrived: number, ended: number) => ({
      technicianId: 'a',
      drivingSince: NOON + driving * MINUTE_MS,
      arrivedAt: NOON + arrived * MINUTE_MS,
      endedAt: NOON + ended * MINUTE_MS,
    });
    expect(visitTimes([visit(0, 10, 50), visit(55, 70, 100), visit(500, 520, 560)])).toEqual({
      driveMinutes: [10, 20, 20],
      serviceMinutes: [40, 30, 40],
    });
  });
});
