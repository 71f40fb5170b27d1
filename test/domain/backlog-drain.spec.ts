import fc from 'fast-check';
import {
  drainByArea,
  drainByTechnician,
  drainHours,
  drainSeries,
  drainTotals,
  forecastEmpty,
  type DrainCall,
} from '@shared/domain/backlog-drain';
import { addMinutes, HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';

const MORNING: Instant = Date.UTC(2031, 8, 14, 6, 0);
const minute = (minutes: number): Instant => addMinutes(MORNING, minutes);

const aCall = (known: Partial<DrainCall> = {}): DrainCall => ({
  arrivedAt: MORNING,
  settledAt: null,
  settledHow: null,
  areaId: null,
  technicianId: null,
  compartments: [],
  ...known,
});

const worth = (valueCents: number, saveBy: number | null, restored: number | null = null) => ({
  valueCents,
  saveByAt: saveBy === null ? null : minute(saveBy),
  restoredAt: restored === null ? null : minute(restored),
});

describe('drainHours', () => {
  // The fluid rule: backlog / (people * calls per person-hour - arrivals per hour).
  it('empties 300 waiting calls in 10 h with five people at 10 an hour against 20 new ones', () => {
    expect(drainHours(300, 5 * 10, 20)).toBe(10);
  });

  it('needs 4.4 days for 210 visits with eight technicians at six a day', () => {
    // 300 calls of which 30 % are settled by phone.
    const hours = drainHours(300 * 0.7, (8 * 6) / 24, 0)!;
    expect(hours / 24).toBeCloseTo(4.375, 9);
  });

  it.each([
    [300, 20, 20],
    [300, 19, 20],
  ])('never empties %d calls at %d out and %d in', (backlog, outflow, inflow) => {
    expect(drainHours(backlog, outflow, inflow)).toBeNull();
  });

  it('has nothing to do for an empty backlog, whatever comes in', () => {
    expect(drainHours(0, 0, 50)).toBe(0);
  });
});

describe('drainSeries', () => {
  const calls = [
    aCall({ arrivedAt: minute(5), settledAt: minute(25), settledHow: 'phone' }),
    aCall({ arrivedAt: minute(15), settledAt: minute(60), settledHow: 'visit' }),
    aCall({ arrivedAt: minute(35) }),
  ];

  it('counts what had happened at the end of each bucket, from nothing to now', () => {
    const series = drainSeries(calls, minute(70), 20);
    const rows = series.map((p) => [
      (p.at - MORNING) / MINUTE_MS,
      p.arrivals,
      p.settledByPhone,
      p.settledByVisit,
      p.open,
    ]);
    expect(rows).toEqual([
      [0, 0, 0, 0, 0],
      [20, 2, 0, 0, 2],
      [40, 3, 1, 0, 2],
      [60, 3, 1, 1, 1],
      [70, 3, 1, 1, 1],
    ]);
  });

  it('starts before a call that came on the stroke of a bucket', () => {
    const [first, second] = drainSeries([aCall()], minute(30), 20);
    expect(first).toMatchObject({ at: minute(-20), arrivals: 0 });
    expect(second).toMatchObject({ at: MORNING, arrivals: 1 });
  });

  it('has one empty point for a storm without calls', () => {
    expect(drainSeries([], MORNING, 15)).toEqual([
      expect.objectContaining({ at: MORNING, arrivals: 0, open: 0, valueAtRiskCents: 0 }),
    ]);
  });

  it('moves value from at risk to saved or lost at the moment when that is decided', () => {
    const call = aCall({
      compartments: [worth(100, 30), worth(20, 50, 40), worth(3, 50, 50), worth(4_000, null)],
    });
    const value = (minutes: number) => {
      const { valueAtRiskCents, savedCents, lostCents } = drainTotals([call], minute(minutes));
      return [valueAtRiskCents, savedCents, lostCents];
    };
    expect(value(29)).toEqual([4_123, 0, 0]);
    expect(value(30)).toEqual([4_023, 0, 100]);
    expect(value(40)).toEqual([4_003, 20, 100]);
    // Restored at save-by itself is too late.
    expect(value(50)).toEqual([4_000, 20, 103]);
  });

  it('counts what was lost before the call came, from when it came', () => {
    const late = aCall({ arrivedAt: minute(60), compartments: [worth(100, 10)] });
    expect(drainTotals([late], minute(59)).lostCents).toBe(0);
    expect(drainTotals([late], minute(60))).toMatchObject({ lostCents: 100, valueAtRiskCents: 0 });
  });

  it('knows nothing yet of what lies after now', () => {
    const call = aCall({
      settledAt: minute(90),
      settledHow: 'visit',
      compartments: [worth(100, 200, 90)],
    });
    const later = aCall({ arrivedAt: minute(80) });
    expect(drainTotals([call, later], minute(60))).toMatchObject({
      arrivals: 1,
      open: 1,
      valueAtRiskCents: 100,
      savedCents: 0,
    });
  });

  it('takes a settled call whose contents are still unsaved for at risk until save-by', () => {
    const referred = aCall({
      settledAt: minute(10),
      settledHow: 'phone',
      compartments: [worth(100, 60)],
    });
    expect(drainTotals([referred], minute(20))).toMatchObject({ open: 0, valueAtRiskCents: 100 });
    expect(drainTotals([referred], minute(60))).toMatchObject({ open: 0, lostCents: 100 });
  });
});

describe('conservation', () => {
  const moment = fc.integer({ min: -100, max: 1_500 }).map(minute);
  const someCall: fc.Arbitrary<DrainCall> = fc
    .record({
      arrivedAt: moment,
      settled: fc.option(fc.tuple(moment, fc.constantFrom('phone', 'visit'))),
      areaId: fc.option(fc.constantFrom('north', 'south')),
      technicianId: fc.option(fc.constantFrom('ada', 'ben')),
      compartments: fc.array(
        fc.record({
          valueCents: fc.nat(50_000),
          saveByAt: fc.option(moment),
          restoredAt: fc.option(moment),
        }),
        { maxLength: 3 },
      ),
    })
    .map(({ settled, ...call }) => ({
      ...call,
      settledAt: settled?.[0] ?? null,
      settledHow: settled?.[1] ?? null,
    }));
  const night = fc.array(someCall, { maxLength: 25 });

  it('holds at every point: arrivals are open or settled, value is at risk, saved or lost', () => {
    fc.assert(
      fc.property(night, moment, fc.constantFrom(7, 15, 60), (calls, now, bucketMinutes) => {
        for (const point of drainSeries(calls, now, bucketMinutes)) {
          const arrived = calls.filter(({ arrivedAt }) => arrivedAt <= point.at);
          const value = arrived.flatMap(({ compartments }) => compartments);
          expect(point.arrivals).toBe(arrived.length);
          expect(point.open + point.settledByPhone + point.settledByVisit).toBe(point.arrivals);
          expect(point.valueAtRiskCents + point.savedCents + point.lostCents).toBe(
            value.reduce((sum, { valueCents }) => sum + valueCents, 0),
          );
          expect(Math.min(point.open, point.valueAtRiskCents)).toBeGreaterThanOrEqual(0);
        }
      }),
    );
  });

  it('counts never fall, and the last point is the totals of now', () => {
    fc.assert(
      fc.property(night, moment, (calls, now) => {
        const series = drainSeries(calls, now, 15);
        for (const [i, point] of series.entries()) {
          const before = series[i - 1];
          if (!before) continue;
          expect(point.at).toBeGreaterThan(before.at);
          for (const key of ['arrivals', 'settledByPhone', 'savedCents', 'lostCents'] as const) {
            expect(point[key]).toBeGreaterThanOrEqual(before[key]);
          }
        }
        expect(series.at(-1)).toEqual({ at: now, ...drainTotals(calls, now) });
      }),
    );
  });

  it('holds across areas and across technicians: the parts add up to the whole', () => {
    fc.assert(
      fc.property(night, moment, (calls, now) => {
        const whole = drainTotals(calls, now);
        for (const groups of [drainByArea(calls, now), drainByTechnician(calls, now)]) {
          const sum = (key: keyof typeof whole) =>
            groups.reduce((total, group) => total + group[key], 0);
          for (const key of Object.keys(whole) as (keyof typeof whole)[]) {
            expect(sum(key)).toBe(whole[key]);
          }
        }
      }),
    );
  });
});

describe('drainByArea', () => {
  it('puts the largest backlog first and the calls without an area last', () => {
    const calls = [
      aCall(),
      aCall(),
      aCall(),
      aCall({ areaId: 'north' }),
      aCall({ areaId: 'south' }),
      aCall({ areaId: 'south' }),
    ];
    expect(drainByArea(calls, MORNING).map(({ id, open }) => [id, open])).toEqual([
      ['south', 2],
      ['north', 1],
      [null, 3],
    ]);
  });

  it('does not name an area before its first call', () => {
    const calls = [aCall({ areaId: 'north' }), aCall({ areaId: 'south', arrivedAt: minute(5) })];
    expect(drainByArea(calls, minute(4)).map(({ id }) => id)).toEqual(['north']);
  });
});

describe('forecastEmpty', () => {
  /** `count` calls, one every `every` minutes from `start`. */
  const arriving = (count: number, start: number, every: number, known: Partial<DrainCall> = {}) =>
    Array.from({ length: count }, (_, i) =>
      aCall({ arrivedAt: minute(start + i * every), ...known }),
    );

  it('carries the rates of the window on', () => {
    // 100 came long ago. In the last two hours 10 came and 60 were settled: 50 left, 25 an hour less.
    const settledAt = (i: number) => ({ settledAt: minute(482 + i), settledHow: 'phone' }) as const;
    const calls = [
      ...arriving(100, 0, 1).map((call, i) => (i < 60 ? { ...call, ...settledAt(i) } : call)),
      ...arriving(10, 490, 10),
    ];
    expect(forecastEmpty(calls, minute(600), 120)).toEqual({
      emptyAt: minute(600) + 2 * HOUR_MS,
      arrivalsPerHour: 5,
      settledPerHour: 30,
      windowMinutes: 120,
      assumption:
        'If it goes on with 5 calls an hour coming in and 30 settled, as in the last 120 minutes',
    });
  });

  it('says never, with the rates, while more comes in than goes out', () => {
    const forecast = forecastEmpty(arriving(60, 0, 1), minute(60), 60);
    expect(forecast.emptyAt).toBeNull();
    expect(forecast.assumption).toBe(
      'Never at this rate: 60 calls an hour coming in and 0 settled, as in the last 60 minutes',
    );
  });

  it('counts a young storm over its own age, and no less than a quarter of an hour', () => {
    const halfHour = forecastEmpty(arriving(30, 0, 1), minute(30), 120);
    expect(halfHour).toMatchObject({ windowMinutes: 30, arrivalsPerHour: 60 });
    const oneCall = forecastEmpty([aCall()], minute(1), 120);
    expect(oneCall).toMatchObject({ windowMinutes: 15, arrivalsPerHour: 4 });
  });

  it('is empty now when nothing is open', () => {
    const calls = [aCall({ settledAt: minute(5), settledHow: 'visit' })];
    expect(forecastEmpty(calls, minute(60)).emptyAt).toBe(minute(60));
    expect(forecastEmpty([], minute(60)).emptyAt).toBe(minute(60));
  });

  it('agrees with the fluid rule on the storm desk example', () => {
    // 300 waiting; in the last hour 20 came and 50 were settled: 10 h.
    const settled = { settledAt: minute(990), settledHow: 'phone' } as const;
    const calls = [...arriving(280, 0, 1), ...arriving(50, 0, 1, settled), ...arriving(20, 942, 2)];
    expect(forecastEmpty(calls, minute(1_000), 60).emptyAt).toBe(minute(1_000) + 10 * HOUR_MS);
  });
});
