/** A place on the earth in degrees, in the order of GeoJSON: longitude first. */
export type LonLat = readonly [lon: number, lat: number];

/** Mean earth radius R1. Source: IUGG; Moritz, "Geodetic Reference System 1980", J. Geodesy 74 (2000). */
export const EARTH_RADIUS_KM = 6371.0088;

const RADIANS = Math.PI / 180;

/**
 * Shortest way over a sphere, in kilometres (haversine formula).
 *
 * A sphere differs from the ellipsoid WGS 84 by at most about half a per cent, far less than the
 * uncertainty of the roads between two doors.
 */
export function greatCircleKm([lonA, latA]: LonLat, [lonB, latB]: LonLat): number {
  const sinLat = Math.sin(((latB - latA) * RADIANS) / 2);
  const sinLon = Math.sin(((lonB - lonA) * RADIANS) / 2);
  const hav = sinLat ** 2 + Math.cos(latA * RADIANS) * Math.cos(latB * RADIANS) * sinLon ** 2;
  return 2 * EARTH_RADIUS_KM * Math.asin(Math.min(1, Math.sqrt(hav)));
}

/**
 * The same distance for a whole table of pairs: each place becomes a point on the unit sphere once,
 * and half the chord between two points is the square root of their haversine.
 *
 * @returns kilometres, row-major: from × points.length + to
 */
export function greatCircleTableKm(points: readonly LonLat[]): Float64Array {
  const n = points.length;
  const x = new Float64Array(n);
  const y = new Float64Array(n);
  const z = new Float64Array(n);
  points.forEach(([lon, lat], i) => {
    if (!Number.isFinite(lon) || !Number.isFinite(lat)) {
      throw new RangeError(`Point ${i} has no place: [${lon}, ${lat}].`);
    }
    const cosLat = Math.cos(lat * RADIANS);
    x[i] = cosLat * Math.cos(lon * RADIANS);
    y[i] = cosLat * Math.sin(lon * RADIANS);
    z[i] = Math.sin(lat * RADIANS);
  });
  const table = new Float64Array(n * n);
  for (let a = 0; a < n; a++) {
    for (let b = a + 1; b < n; b++) {
      const dx = x[a]! - x[b]!;
      const dy = y[a]! - y[b]!;
      const dz = z[a]! - z[b]!;
      const halfChord = Math.min(1, Math.sqrt(dx * dx + dy * dy + dz * dz) / 2);
      const km = 2 * EARTH_RADIUS_KM * Math.asin(halfChord);
      table[a * n + b] = km;
      table[b * n + a] = km;
    }
  }
  return table;
}
