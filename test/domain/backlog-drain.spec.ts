import fc from 'fast-check';
import {
  drainByArea,
  drainByTechnician,
  drainSeries,
  drainTotals,
  type DrainCall,
} from '@shared/domain/backlog-drain';
import { addMinutes, MINUTE_MS, type Instant } from '@shared/domain/instant';

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
