import { landOf } from '../../server/region/coastline';
import type { LonLat, OsmExtract } from '../../server/region/osm-extract';
import {
  innerPoint,
  isInsideRing,
  polygonsOf,
  signedArea,
  stitched,
} from '../../server/region/rings';

/** An extract of ways over a square of ten by ten degrees; nodes named in `missing` were cut away. */
function extractOf(coast: LonLat[][], missing: readonly number[] = []): OsmExtract {
  const places: LonLat[] = [];
  const numberOf = (at: LonLat): number => {
    const known = places.findIndex(([lon, lat]) => lon === at[0] && lat === at[1]);
    return known >= 0 ? known : places.push(at) - 1;
  };
  const ways = new Map(
    coast.map((line, id) => [id, { id, refs: line.map(numberOf), tags: { natural: 'coastline' } }]),
  );
  return {
    namedNodes: [],
    ways,
    relations: [],
    bbox: [0, 0, 10, 10],
    at: (node) => (missing.includes(node) ? null : (places[node] ?? null)),
  };
}

/** Whether a point is land: in an outer ring and in none of its holes. */
const isLand = (land: LonLat[][][], at: LonLat): boolean =>
  land.some(
    ([outer, ...holes]) =>
      isInsideRing(at, outer!) && !holes.some((hole) => isInsideRing(at, hole)),
  );

describe('landOf', () => {
  it('has no land to draw where there is no coast', () =>
    expect(landOf(extractOf([]))).toEqual([]));

  it('lies left of a coast that crosses the extract', () => {
    // Northward through the middle: land in the west.
    const land = landOf(
      extractOf([
        [
          [5, -1],
          [5, 4],
        ],
        [
          [5, 4],
          [5, 11],
        ],
      ]),
    );
    expect(isLand(land, [2, 5])).toBe(true);
    expect(isLand(land, [8, 5])).toBe(false);
    expect(Math.abs(signedArea(land[0]![0]!))).toBeCloseTo(50, 6);
  });

  it('lies left of a coast that runs the other way', () => {
    const land = landOf(
      extractOf([
        [
          [5, 11],
          [5, -1],
        ],
      ]),
    );
    expect(isLand(land, [8, 5])).toBe(true);
    expect(isLand(land, [2, 5])).toBe(false);
  });

  it('stitches ways in whatever order they come', () => {
    const land = landOf(
      extractOf([
        [
          [3, 6],
          [5, 11],
        ],
        [
          [5, -1],
          [3, 2],
        ],
        [
          [3, 2],
          [3, 6],
        ],
      ]),
    );
    expect(land.length).toBe(1);
    expect(isLand(land, [1, 5])).toBe(true);
    expect(isLand(land, [4.5, 5])).toBe(false);
  });

  it('keeps a strait between two coasts open', () => {
    const land = landOf(
      extractOf([
        [
          [4, -1],
          [4, 11],
        ],
        [
          [6, 11],
          [6, -1],
        ],
      ]),
    );
    expect(isLand(land, [2, 5])).toBe(true);
    expect(isLand(land, [5, 5])).toBe(false);
    expect(isLand(land, [8, 5])).toBe(true);
  });

  it('cuts off only the corner that a coast cuts off', () => {
    const land = landOf(
      extractOf([
        [
          [10.5, 3],
          [7, -0.5],
        ],
      ]),
    );
    // South-westward: land on the left is the south-east corner.
    expect(isLand(land, [9.5, 0.5])).toBe(true);
    expect(isLand(land, [2, 8])).toBe(false);
    expect(land.length).toBe(1);
  });

  it('draws an island, and the lagoon in it', () => {
    const ring = (west: number, south: number, size: number, isLandInside: boolean): LonLat[] => {
      const points: LonLat[] = [
        [west, south],
        [west + size, south],
        [west + size, south + size],
        [west, south + size],
        [west, south],
      ];
      return isLandInside ? points : points.reverse();
    };
    const land = landOf(extractOf([ring(2, 2, 6, true), ring(4, 4, 2, false)]));
    expect(isLand(land, [3, 3])).toBe(true);
    expect(isLand(land, [5, 5])).toBe(false);
    expect(isLand(land, [9, 9])).toBe(false);
  });

  it('takes everything but a bay for land when the coast only bounds water', () => {
    const land = landOf(
      extractOf([
        [
          [4, 4],
          [4, 6],
          [6, 6],
          [6, 4],
          [4, 4],
        ],
      ]),
    );
    expect(isLand(land, [1, 1])).toBe(true);
    expect(isLand(land, [5, 5])).toBe(false);
  });

  it('carries a coast on to the edge where the extract lacks its end', () => {
    const land = landOf(
      extractOf(
        [
          [
            [5, -1],
            [5, 5],
            [5, 9],
            [5, 20],
          ],
        ],
        [3],
      ),
    );
    expect(isLand(land, [2, 5])).toBe(true);
    expect(isLand(land, [8, 5])).toBe(false);
  });
});

describe('stitched', () => {
  it('joins ways of either direction into one ring', () => {
    const [ring, ...others] = stitched(
      [
        [1, 2, 3],
        [5, 4, 3],
        [5, 6, 1],
      ],
      true,
    );
    expect(others).toEqual([]);
    expect(ring![0]).toBe(ring![ring!.length - 1]);
    expect([...new Set(ring)].sort()).toEqual([1, 2, 3, 4, 5, 6]);
  });

  it('leaves apart what does not meet', () =>
    expect(
      stitched(
        [
          [1, 2],
          [3, 4],
        ],
        true,
      ).length,
    ).toBe(2));
});

describe('polygonsOf', () => {
  const square = (west: number, size: number): LonLat[] => [
    [west, west],
    [west + size, west],
    [west + size, west + size],
    [west, west + size],
    [west, west],
  ];
  const members = [
    { type: 'way' as const, ref: 0, role: 'outer' },
    { type: 'way' as const, ref: 1, role: 'inner' },
    { type: 'way' as const, ref: 77, role: 'outer' },
  ];

  it('gives the hole to the ring around it, and does without ways that were cut away', () => {
    const polygons = polygonsOf(extractOf([square(1, 8), square(4, 1)]), {
      id: 1,
      members,
      tags: {},
    });
    expect(polygons.length).toBe(1);
    expect(polygons[0]!.length).toBe(2);
  });

  it('leaves out a ring with a gap', () => {
    expect(
      polygonsOf(extractOf([square(1, 8), square(4, 1)], [2]), { id: 1, members, tags: {} }),
    ).toEqual([]);
  });
});

describe('innerPoint', () => {
  it('lies inside, even of a horseshoe', () => {
    const horseshoe: LonLat[] = [
      [0, 0],
      [10, 0],
      [10, 10],
      [8, 10],
      [8, 2],
      [2, 2],
      [2, 10],
      [0, 10],
      [0, 0],
    ];
    expect(isInsideRing(innerPoint(horseshoe), horseshoe)).toBe(true);
  });
});
