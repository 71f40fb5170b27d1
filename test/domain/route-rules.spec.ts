import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import {
  firmCount,
  heldCount,
  lastSeen,
  missingSkills,
  offersDue,
  placeOnRoute,
  routeTimes,
  shiftOf,
  type RouteStop,
  type RouteStopState,
  type TimedStop,
} from '@shared/domain/route-rules';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { TravelTimes } from '@shared/domain/travel/travel-times';

const NOON = Date.UTC(2026, 9, 3, 12);
const route = (...states: (RouteStopState | 'locked')[]): RouteStop[] =>
  states.map((state) =>
    state === 'locked' ? { state: 'planned', locked: true } : { state, locked: false },
  );

describe('heldCount', () => {
  it.each([
    { stops: route(), held: 0, firm: 0 },
    { stops: route('offered', 'planned'), held: 0, firm: 0 },
    { stops: route('on-site', 'planned'), held: 1, firm: 1 },
    { stops: route('accepted', 'planned', 'locked', 'planned'), held: 3, firm: 1 },
  ])('holds $held stops of a route of which $firm are firm', ({ stops, held, firm }) => {
    expect([heldCount(stops), firmCount(stops)]).toEqual([held, firm]);
  });
});

describe('placeOnRoute', () => {
  it('is the asked one, but never before a firm stop nor beyond the end', () => {
    const others = route('accepted', 'planned', 'locked');
    expect([0, 1, 2, 3, 99].map((asked) => placeOnRoute(others, asked))).toEqual([1, 1, 2, 3, 3]);
  });
});

describe('offersDue', () => {
  it('offers the first stop while nothing is offered or under work', () => {
    expect(offersDue(route('planned', 'planned'))).toEqual({ offer: 0, withdraw: [] });
    for (const first of ['offered', 'accepted', 'travelling', 'on-site'] as const)
      expect(offersDue(route(first, 'planned'))).toEqual({ offer: null, withdraw: [] });
    expect(offersDue([])).toEqual({ offer: null, withdraw: [] });
  });

  it('takes an offer back that another stop has been put before', () => {
    expect(offersDue(route('planned', 'offered'))).toEqual({ offer: 0, withdraw: [1] });
    expect(offersDue(route('accepted', 'offered'))).toEqual({ offer: null, withdraw: [1] });
  });
});

describe('missingSkills', () => {
  it('names every skill that is needed and not there', () => {
    expect(missingSkills(['sealed-system', 'electrical'], ['electrical'])).toEqual([
      'sealed-system',
    ]);
    expect(missingSkills([], [])).toEqual([]);
  });
});

describe('lastSeen', () => {
  it('is the newest sighting, and home when there is none', () => {
    const home: LonLat = [0, 0];
    expect(lastSeen(home, [])).toEqual(home);
    expect(
      lastSeen(home, [
        { at: [1, 1], seenAt: NOON },
        { at: [2, 2], seenAt: NOON + 1 },
        { at: [3, 3], seenAt: NOON - 1 },
      ]),
    ).toEqual([2, 2]);
  });
});

describe('shiftOf', () => {
  const shifts = [
    { startsAt: NOON, endsAt: NOON + 8 * HOUR_MS },
    { startsAt: NOON + 20 * HOUR_MS, endsAt: NOON + 28 * HOUR_MS },
  ];
  it.each([
    { hour: -3, shift: 0, why: 'before all shifts' },
    { hour: 4, shift: 0, why: 'in the first' },
    { hour: 8.5, shift: 0, why: 'within an hour of overtime' },
    { hour: 9, shift: 1, why: 'past overtime' },
    { hour: 40, shift: 1, why: 'later than all' },
  ])('puts an arrival $why into shift $shift', ({ hour, shift }) => {
    expect(shiftOf(shifts, NOON + hour * HOUR_MS)).toBe(shift);
  });

  it('knows no shift where there is none', () => expect(shiftOf([], NOON)).toBe(-1));
});

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
  ...told,
});

describe('routeTimes', () => {
  const start = {
    now: NOON,
    at: [10, 0] as LonLat,
    home: [0, 0] as LonLat,
    shifts: [{ startsAt: NOON - HOUR_MS, endsAt: NOON + 8 * HOUR_MS }],
  };
  const times = (stops: TimedStop[], from = start) =>
    routeTimes(from, stops, TRAVEL, 30).map((one) => [
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
});
