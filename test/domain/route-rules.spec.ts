import { HOUR_MS } from '@shared/domain/instant';
import {
  firmCount,
  heldCount,
  lastSeen,
  missingSkills,
  offersDue,
  placeOnRoute,
  shiftOf,
  type RouteStop,
  type RouteStopState,
} from '@shared/domain/route-rules';
import type { LonLat } from '@shared/domain/travel/great-circle';

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
    expect(shiftOf(shifts, NOON + hour * HOUR_MS, 60)).toBe(shift);
  });

  it('knows no shift where there is none', () => expect(shiftOf([], NOON, 60)).toBe(-1));
});
