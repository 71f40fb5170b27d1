import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { routeTimes, type RouteStart, type TimedStop } from '@shared/domain/route-times';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { TravelTimes } from '@shared/domain/travel/travel-times';

const NOON = Date.UTC(2026, 9, 3, 12);

/** Drives of as many minutes as the longitudes are degrees apart. */
const TRAVEL: TravelTimes = {
  source: 'test',
  distanceKm: () => 0,
  matrix: (points) => {
    const [from, to] = points;
    return Float64Array.from([0, 60 * Math.abs((to?.[0] ?? 0) - (from?.[0] ?? 0)), 0, 0]);
  },
};
const minutes = (ms: number): number => (ms - NOON) / MINUTE_MS;
const stopAt = (lon: number | null, told: Partial<TimedStop> = {}): TimedStop => ({
  state: 'planned',
  locked: false,
  lonLat: lon === null ? null : [lon, 0],
  arriveAt: NOON,
  driveMinutes: 0,
  serviceMinutes: 30,
  ...told,
});

describe('routeTimes', () => {
  const start = {
    now: NOON,
    at: [10, 0] as LonLat,
    home: [0, 0] as LonLat,
    shifts: [{ startsAt: NOON - HOUR_MS, endsAt: NOON + 8 * HOUR_MS }],
    shop: null,
    mostOvertimeMinutes: 60,
  };
  const times = (stops: TimedStop[], from: RouteStart = start) =>
    routeTimes(from, stops, TRAVEL).map((one) => [
      minutes(one.arriveAt),
      minutes(one.finishAt),
      one.driveMinutes,
    ]);

  it('chains drives and work from where the technician is', () => {
    expect(times([stopAt(15), stopAt(35)])).toEqual([
      [5, 35, 5],
      [55, 85, 20],
    ]);
  });

  it('keeps the known arrival of a stop under way, and what follows starts from its door', () => {
    const underWay = stopAt(40, {
      state: 'travelling',
      arriveAt: NOON + 12 * MINUTE_MS,
      driveMinutes: 12,
    });
    expect(times([underWay, stopAt(35)])).toEqual([
      [12, 42, 12],
      [47, 77, 5],
    ]);
  });

  it('does not let work that takes too long end in the past', () => {
    const late = stopAt(10, { state: 'on-site', arriveAt: NOON - 3 * HOUR_MS });
    expect(times([late, stopAt(20)])).toEqual([
      [-180, 0, 0],
      [10, 40, 10],
    ]);
  });

  it('waits for a shift that is yet to begin, at home', () => {
    const from = {
      ...start,
      shifts: [{ startsAt: NOON + HOUR_MS, endsAt: NOON + 8 * HOUR_MS }],
    };
    expect(times([stopAt(7)], from)).toEqual([[67, 97, 7]]);
  });

  it('leaves a stop of tomorrow to tomorrow, and starts that day at home', () => {
    const from = {
      ...start,
      shifts: [...start.shifts, { startsAt: NOON + 20 * HOUR_MS, endsAt: NOON + 28 * HOUR_MS }],
    };
    expect(
      times([stopAt(15), stopAt(3, { arriveAt: NOON + 21 * HOUR_MS }), stopAt(4)], from),
    ).toEqual([
      [5, 35, 5],
      [1203, 1233, 3],
      [1234, 1264, 1],
    ]);
  });

  it('counts no drive to a place that nobody knows', () => {
    expect(times([stopAt(null), stopAt(12)])).toEqual([
      [0, 30, 0],
      [32, 62, 2],
    ]);
  });

  it('waits at the door for an agreed window, and begins at once after it', () => {
    const window = (from: number, to: number) => ({
      from: NOON + from * MINUTE_MS,
      to: NOON + to * MINUTE_MS,
    });
    expect(times([stopAt(15, { window: window(20, 50) }), stopAt(20)])).toEqual([
      [5, 50, 5],
      [55, 85, 5],
    ]);
    expect(times([stopAt(15, { window: window(-60, -30) })])).toEqual([[5, 35, 5]]);
  });

  it('takes each visit’s own time', () => {
    expect(times([stopAt(15, { serviceMinutes: 50 }), stopAt(20)])).toEqual([
      [5, 55, 5],
      [60, 90, 5],
    ]);
  });

  it('drives by the store where parts are fetched', () => {
    const shop = { at: [20, 0] as LonLat, minutes: 8 };
    expect(times([stopAt(12, { fetches: true }), stopAt(14)], { ...start, shop })).toEqual([
      // 10 to the store, 8 there, 8 back to the door.
      [26, 56, 18],
      [58, 88, 2],
    ]);
  });

  it.each([
    { from: 20, to: 90, why: 'after the first visit, once it is due', arrivals: [5, 65] },
    {
      from: 60,
      to: 64,
      why: 'before, waiting for it, when the next visit would end too late',
      arrivals: [5, 90],
    },
    { from: -60, to: -10, why: 'not at all, once it is too late for it', arrivals: [5, 45] },
    { from: 0, to: 30, why: 'first, when it is due now', arrivals: [25, 65] },
  ])('takes a break of 20 min from $from to $to $why', ({ from, to, arrivals }) => {
    const breaks = [{ from: NOON + from * MINUTE_MS, to: NOON + to * MINUTE_MS, minutes: 20 }];
    const [shift] = start.shifts;
    const found = times([stopAt(15), stopAt(25)], {
      ...start,
      shifts: [{ ...shift!, breaks }],
    });
    expect(found.map(([arrive]) => arrive)).toEqual(arrivals);
  });
});
