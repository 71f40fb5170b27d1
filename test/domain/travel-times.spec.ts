import { distance as turfDistance } from '@turf/turf';
import { Geodesic } from 'geographiclib-geodesic';
import fc from 'fast-check';
import { greatCircleKm, greatCircleTableKm, type LonLat } from '@shared/domain/travel/great-circle';
import {
  DEFAULT_TRAVEL,
  straightLineTravel,
  travelMatrix,
} from '@shared/domain/travel/travel-times';

const lonLat = (maxLat = 89): fc.Arbitrary<LonLat> =>
  fc.tuple(
    fc.double({ min: -180, max: 180, noNaN: true }),
    fc.double({ min: -maxLat, max: maxLat, noNaN: true }),
  );

/** Places within a county, so that pairs are as far apart as real drives. */
const nearby = fc
  .tuple(
    lonLat(70),
    fc.double({ min: -1, max: 1, noNaN: true }),
    fc.double({ min: -1, max: 1, noNaN: true }),
  )
  .map(([[lon, lat], east, north]): [LonLat, LonLat] => [
    [lon, lat],
    [lon + east, lat + north],
  ]);

describe('greatCircleKm', () => {
  // Worked value for R = 6371.0088 km: (30 N, 95 W) to (30.1 N, 95.1 W).
  it('gives 14.707 km for the check pair', () => {
    expect(greatCircleKm([-95, 30], [-95.1, 30.1])).toBeCloseTo(14.707, 3);
  });

  // WGS 84 bends most along the meridian at the equator, with a radius of 6335.4 km there:
  // 6371.0 / 6335.4 = 1.0056, the largest error that a sphere can make.
  it('agrees with the ellipsoid (GeographicLib, Karney 2013) within the error of a sphere', () => {
    fc.assert(
      fc.property(nearby, ([a, b]) => {
        const metres = Geodesic.WGS84.Inverse(a[1], a[0], b[1], b[0]).s12 ?? NaN;
        expect(Math.abs(greatCircleKm(a, b) - metres / 1000)).toBeLessThanOrEqual(
          (0.0057 * metres) / 1000 + 1e-9,
        );
      }),
    );
  });

  it('agrees within 0.5 % with the ellipsoid at the latitudes of the demo county', () => {
    for (const lat of [25, 31, 38, 45, 49]) {
      for (const [east, north] of [
        [0.3, 0],
        [0, 0.3],
        [0.2, -0.2],
      ] as const) {
        const metres = Geodesic.WGS84.Inverse(lat, -38, lat + north, -38 + east).s12 ?? NaN;
        const km = greatCircleKm([-38, lat], [-38 + east, lat + north]);
        expect(Math.abs(km / (metres / 1000) - 1)).toBeLessThan(0.005);
      }
    }
  });

  it('agrees with turf, which uses the same sphere', () => {
    fc.assert(
      fc.property(lonLat(), lonLat(), (a, b) => {
        // turf's earth radius differs from R1 in the seventh digit.
        expect(greatCircleKm(a, b)).toBeCloseTo(turfDistance([...a], [...b]), 1);
      }),
    );
  });

  it('gives the same for a whole table as for each pair', () => {
    fc.assert(
      fc.property(fc.array(lonLat(), { minLength: 1, maxLength: 12 }), (points) => {
        const table = greatCircleTableKm(points);
        points.forEach((a, i) =>
          points.forEach((b, j) => {
            // Near the far side of the earth both forms lose digits; roads never go there.
            const km = greatCircleKm(a, b);
            if (km < 15000) expect(table[i * points.length + j]).toBeCloseTo(km, 5);
          }),
        );
      }),
    );
  });

  it('refuses a place that is not a number', () => {
    expect(() => greatCircleTableKm([[NaN, 30]])).toThrow('Point 0');
  });
});

describe('travelMatrix', () => {
  it('stretches the check pair to 19.85 km of road', () => {
    // 14.707 km × 1.35 = 19.85 km
    expect(straightLineTravel().distanceKm([-95, 30], [-95.1, 30.1])).toBeCloseTo(19.85, 2);
  });

  it('turns the check pair into a drive at the stated speed', () => {
    const seconds = travelMatrix(
      [
        [-95, 30],
        [-95.1, 30.1],
      ],
      { circuity: 1.35, speedKmh: 40, stopSeconds: 120 },
    );
    // 19.854 km / 40 km/h × 3600 s/h + 120 s = 1906.9 s, rounded up
    expect([...seconds]).toEqual([0, 1907, 1907, 0]);
  });

  it('costs nothing to stay, even at a door that two calls share', () => {
    expect([
      ...travelMatrix([
        [-38, 31],
        [-38, 31],
      ]),
    ]).toEqual([0, 0, 0, 0]);
  });

  it('never makes a detour shorter than the direct way', () => {
    fc.assert(
      fc.property(fc.array(nearby, { minLength: 2, maxLength: 4 }), (pairs) => {
        const points = pairs.flat();
        const n = points.length;
        const t = travelMatrix(points);
        for (let a = 0; a < n; a++)
          for (let b = 0; b < n; b++)
            for (let via = 0; via < n; via++) {
              expect(t[a * n + b]!).toBeLessThanOrEqual(t[a * n + via]! + t[via * n + b]!);
            }
      }),
    );
  });

  it('refuses settings that cannot be', () => {
    expect(() => travelMatrix([], { circuity: 0.9 })).toThrow('Circuity 0.9');
    expect(() => travelMatrix([], { speedKmh: 0 })).toThrow('Speed 0');
    expect(() => travelMatrix([], { stopSeconds: -1 })).toThrow('-1');
    expect(DEFAULT_TRAVEL.circuity).toBe(1.35);
  });
});
