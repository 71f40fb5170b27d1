import { booleanPointInPolygon, kinks, multiPolygon, polygon } from '@turf/turf';
import fc from 'fast-check';
import { lastBack, outranks } from '@shared/domain/outage-area';
import {
  crossesItself,
  isInShape,
  type OutageRing,
  type OutageShape,
  shapeFinder,
  shapesOverlap,
} from '@shared/domain/outage-shape';

const square = (west: number, south: number, size: number): [number, number][] => [
  [west, south],
  [west + size, south],
  [west + size, south + size],
  [west, south + size],
  [west, south],
];
const RING_ROAD: OutageShape = [[square(0, 0, 10), square(3, 3, 4)], [square(20, 0, 5)]];

/** A star around a place: no two of its edges cross, whatever the lengths of its rays. */
const star = (x: number, y: number, rays: readonly number[], size: number): OutageRing => {
  const corners = rays.map((ray, i): [number, number] => {
    const angle = (2 * Math.PI * i) / rays.length;
    return [x + Math.cos(angle) * ray * size, y + Math.sin(angle) * ray * size];
  });
  return [...corners, corners[0]!];
};
const aStar = (size: number) =>
  fc
    .tuple(
      fc.double({ min: -3, max: 3, noNaN: true }),
      fc.double({ min: -3, max: 3, noNaN: true }),
      fc.array(fc.double({ min: 0.5, max: 1, noNaN: true }), { minLength: 3, maxLength: 24 }),
    )
    .map(([x, y, rays]) => ({ outer: star(x, y, rays, size), hole: star(x, y, rays, size / 3) }));
const aShape = fc
  .array(fc.tuple(aStar(2), fc.boolean()), { minLength: 1, maxLength: 4 })
  .map((parts): OutageShape =>
    parts.map(([{ outer, hole }, has]) => (has ? [outer, hole] : [outer])),
  );
const aPlace = fc.tuple(
  fc.double({ min: -5, max: 5, noNaN: true }),
  fc.double({ min: -5, max: 5, noNaN: true }),
);

describe('isInShape', () => {
  it('knows holes and parts', () => {
    expect(isInShape([1, 1], RING_ROAD)).toBe(true);
    expect(isInShape([5, 5], RING_ROAD)).toBe(false);
    expect(isInShape([22, 2], RING_ROAD)).toBe(true);
    expect(isInShape([15, 2], RING_ROAD)).toBe(false);
  });

  it('counts ground that two parts share as inside', () => {
    expect(isInShape([2, 2], [[square(0, 0, 3)], [square(1, 1, 3)]])).toBe(true);
  });

  it('agrees with an independent reference on any shape', () => {
    fc.assert(
      fc.property(aShape, fc.array(aPlace, { minLength: 20, maxLength: 20 }), (shape, places) => {
        // The reference takes each part by itself, as a MultiPolygon means it.
        const parts = shape.map((rings) =>
          multiPolygon([rings.map((ring) => ring.map(([x, y]) => [x, y]))]),
        );
        const find = shapeFinder([{ shape }]);
        for (const place of places) {
          const expected = parts.some((part) => booleanPointInPolygon(place, part));
          expect(isInShape(place, shape)).toBe(expected);
          expect(find(place)).toHaveLength(expected ? 1 : 0);
        }
      }),
      { numRuns: 300 },
    );
  });
});

describe('shapesOverlap', () => {
  it.each<[string, OutageShape, boolean]>([
    ['across', [[square(8, 8, 8)]], true],
    ['inside', [[square(1, 1, 1)]], true],
    ['around', [[square(-5, -5, 50)]], true],
    ['itself', RING_ROAD, true],
    [
      'on the same ring with one corner more',
      [[[[0, 0], [5, 0], ...square(0, 0, 10).slice(1)]]],
      true,
    ],
    ['in the hole', [[square(4, 4, 2)]], false],
    ['beside', [[square(12, 0, 5)]], false],
    ['touching along an edge', [[square(10, 0, 5)]], false],
    ['over the second part', [[square(24, 4, 5)]], true],
  ])('of a shape with a hole and two parts with one that lies %s', (_, other, expected) => {
    expect(shapesOverlap(RING_ROAD, other)).toBe(expected);
    expect(shapesOverlap(other, RING_ROAD)).toBe(expected);
  });

  it('is true whenever a place lies in both', () => {
    fc.assert(
      fc.property(aShape, aShape, fc.array(aPlace, { minLength: 20 }), (a, b, places) => {
        if (places.some((place) => isInShape(place, a) && isInShape(place, b)))
          expect(shapesOverlap(a, b)).toBe(true);
      }),
    );
  });
});

describe('crossesItself', () => {
  it('knows a bow from a square, and rings that cross from rings that do not', () => {
    const bow: OutageRing = [
      [0, 0],
      [1, 1],
      [1, 0],
      [0, 1],
      [0, 0],
    ];
    expect(crossesItself([bow])).toBe(true);
    expect(crossesItself([square(0, 0, 2)])).toBe(false);
    expect(crossesItself(RING_ROAD[0]!)).toBe(false);
    expect(crossesItself([square(0, 0, 10), square(8, 8, 5)])).toBe(true);
  });

  it('finds none in a star', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: 0.5, max: 1, noNaN: true }), { minLength: 8, maxLength: 30 }),
        (rays) => {
          expect(crossesItself([star(0, 0, rays, 1)])).toBe(false);
        },
      ),
    );
  });

  it('agrees with an independent reference on rings of any corners', () => {
    // Without bias towards small numbers: corners on edges are touching, which the two count differently.
    const degree = fc.noBias(fc.integer({ min: -1e6, max: 1e6 })).map((one) => one / 1e6);
    fc.assert(
      fc.property(fc.array(fc.tuple(degree, degree), { minLength: 3, maxLength: 9 }), (corners) => {
        const ring = [...corners, corners[0]!];
        expect(crossesItself([ring])).toBe(kinks(polygon([ring])).features.length > 0);
      }),
      { numRuns: 500 },
    );
  });
});

describe('outranks', () => {
  const span = (outAt: number, backAt: number | null) => ({ outAt, backAt });

  it('is what lastBack goes by, in any order', () => {
    const aSpan = fc.record({
      outAt: fc.nat(50),
      backAt: fc.option(fc.integer({ min: 51, max: 99 })),
    });
    fc.assert(
      fc.property(fc.array(aSpan, { minLength: 1, maxLength: 8 }), (spans) => {
        const chosen = lastBack(spans)!;
        expect(spans.some((other) => outranks(other, chosen))).toBe(false);
        expect(lastBack([...spans].reverse())).toEqual(chosen);
      }),
    );
  });

  it('puts still out above every restoration, and the later restoration above the earlier', () => {
    expect(outranks(span(0, null), span(0, 9))).toBe(true);
    expect(outranks(span(0, 9), span(0, null))).toBe(false);
    expect(outranks(span(5, 9), span(0, 8))).toBe(true);
    expect(outranks(span(0, 9), span(5, 9))).toBe(true);
    expect(outranks(span(0, 9), span(0, 9))).toBe(false);
  });
});
