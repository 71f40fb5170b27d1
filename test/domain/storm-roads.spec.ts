import fc from 'fast-check';
import { HOUR_MS } from '@shared/domain/instant';
import {
  inForceAt,
  inForceKey,
  isDuring,
  nextChangeAfter,
  STORM_ROAD_STATES,
  stormRoadFault,
  type StandingStormRoad,
} from '@shared/domain/storm-roads';

const NOON = Date.UTC(2026, 9, 3, 12);
const LINE = {
  type: 'line',
  points: [
    [-47.7, 36.4],
    [-47.69, 36.4],
  ],
} as const;
const RING = {
  type: 'area',
  ring: [
    [-47.7, 36.4],
    [-47.6, 36.4],
    [-47.6, 36.5],
    [-47.7, 36.4],
  ],
} as const;
const closed = {
  kind: 'closed',
  shape: LINE,
  speedShare: null,
  startsAt: NOON,
  endsAt: null,
} as const;

type Versioned = StandingStormRoad & { readonly version: number };

/** Small whole moments, so that beginnings and ends meet often. */
const moment = fc.integer({ min: 0, max: 12 });
const someRoads: fc.Arbitrary<Versioned[]> = fc
  .array(
    fc.record({
      state: fc.constantFrom(...STORM_ROAD_STATES),
      startsAt: moment,
      lasts: fc.option(fc.integer({ min: 0, max: 8 })),
      version: fc.nat(3),
    }),
    { maxLength: 8 },
  )
  .map((rows) =>
    rows.map(({ lasts, ...row }, i) => ({
      ...closed,
      ...row,
      id: `road-${i}`,
      endsAt: lasts === null ? null : row.startsAt + lasts,
    })),
  );
const idsAt = (roads: readonly StandingStormRoad[], at: number): string[] =>
  inForceAt(roads, at)
    .map(({ id }) => id)
    .sort();

describe('what is in force at a moment', () => {
  it('are the confirmed ones that have begun and not ended, as a sweep over time counts them', () => {
    fc.assert(
      fc.property(someRoads, moment, (roads, at) => {
        // The judge walks from beginning to beginning and end to end instead of asking each span.
        const open = new Set<string>();
        const events = roads
          .filter(({ state }) => state === 'confirmed')
          .flatMap(({ id, startsAt, endsAt }) => [
            { at: startsAt, id, opens: true },
            ...(endsAt === null ? [] : [{ at: endsAt, id, opens: false }]),
          ])
          // What begins and ends in one moment never was.
          .sort((a, b) => a.at - b.at || Number(b.opens) - Number(a.opens));
        for (const event of events.filter((one) => one.at <= at))
          if (event.opens) open.add(event.id);
          else open.delete(event.id);
        expect(idsAt(roads, at)).toEqual([...open].sort());
      }),
    );
  });

  it('stays the same until the next change that is foretold, and no change is left out', () => {
    fc.assert(
      fc.property(someRoads, moment, (roads, at) => {
        const next = nextChangeAfter(roads, at);
        const now = idsAt(roads, at);
        for (let later = at; later < (next ?? 40); later++)
          expect(idsAt(roads, later)).toEqual(now);
        if (next !== null) expect(next).toBeGreaterThan(at);
      }),
    );
  });

  it('has one name for one set, in whatever order the roads come', () => {
    fc.assert(
      fc.property(someRoads, moment, moment, (roads, a, b) => {
        const same = JSON.stringify(idsAt(roads, a)) === JSON.stringify(idsAt(roads, b));
        expect(inForceKey(roads, a) === inForceKey([...roads].reverse(), b)).toBe(same);
      }),
    );
  });

  it('holds the beginning of a span and not its end', () => {
    const span = { startsAt: NOON, endsAt: NOON + HOUR_MS };
    expect(
      [NOON - 1, NOON, NOON + HOUR_MS - 1, NOON + HOUR_MS].map((at) => isDuring(span, at)),
    ).toEqual([false, true, true, false]);
  });
});

describe('stormRoadFault', () => {
  it.each([
    [closed, null],
    [{ ...closed, shape: RING }, null],
    [{ ...closed, kind: 'flooded', shape: RING }, null],
    [{ ...closed, kind: 'slow', speedShare: 0.5, shape: RING }, null],
    [{ ...closed, endsAt: NOON }, /ends before/],
    [{ ...closed, kind: 'slow' }, /How slow/],
    [{ ...closed, kind: 'slow', speedShare: 0.05 }, /10 and 90/],
    [{ ...closed, kind: 'slow', speedShare: 0.95 }, /10 and 90/],
    [{ ...closed, kind: 'slow', speedShare: NaN }, /10 and 90/],
    [{ ...closed, speedShare: 0.5 }, /no speed/],
    [
      {
        ...closed,
        shape: {
          type: 'line',
          points: [
            [0, 0],
            [0, 0],
          ],
        },
      },
      /no length/,
    ],
    [
      {
        ...closed,
        shape: {
          type: 'line',
          points: [
            [0, 0],
            [1, 0],
          ],
        },
      },
      /longer than 60 km/,
    ],
  ] as const)('says of %j: %s', (road, words) => {
    const fault = stormRoadFault(road);
    if (words === null) expect(fault).toBeNull();
    else expect(fault).toMatch(words);
  });
});
