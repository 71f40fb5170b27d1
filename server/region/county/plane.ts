// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { sqrt } = Math;

/** A place on the county's own plane: metres east and north of its middle. */
export type Point = readonly [x: number, y: number];

/** The middle of the county lies in the open Atlantic, more than 1,000 km from any land. */
const MIDDLE_LON = -47.7;
const MIDDLE_LAT = 36.4;

/** Metres per degree at the middle's latitude on the WGS84 ellipsoid, fixed as numbers so that no cosine is needed. */
const METRES_PER_DEGREE_LON = 89_701;
const METRES_PER_DEGREE_LAT = 110_972;

const round7 = (degrees: number): number => Math.round(degrees * 1e7) / 1e7;

export const toLonLat = ([x, y]: Point): [lon: number, lat: number] => [
  round7(MIDDLE_LON + x / METRES_PER_DEGREE_LON),
  round7(MIDDLE_LAT + y / METRES_PER_DEGREE_LAT),
];

export function distance(a: Point, b: Point): number {
  const dx = a[0] - b[0];
  const dy = a[1] - b[1];
  return sqrt(dx * dx + dy * dy);
}

export const between = (a: Point, b: Point, share: number): Point => [
  a[0] + (b[0] - a[0]) * share,
  a[1] + (b[1] - a[1]) * share,
];

export function lengthOf(line: readonly Point[]): number {
  let total = 0;
  for (let i = 1; i < line.length; i++) total += distance(line[i - 1]!, line[i]!);
  return total;
}

/** A unit vector for a number in (-1, 1), spread over all directions by quarter turns; no sines needed. */
export function direction(tangent: number, quarterTurns: number): Point {
  const d = 1 + tangent * tangent;
  const c = (1 - tangent * tangent) / d;
  const s = (2 * tangent) / d;
  switch (quarterTurns & 3) {
    case 0:
      return [c, s];
    case 1:
      return [-s, c];
    case 2:
      return [-c, -s];
    default:
      return [s, -c];
  }
}

/** The unit vectors of a circle cut into `count` parts, by turning one exact vector again and again. */
export function circle(count: number): Point[] {
  // tan(pi / count) by its series; the last bits do not matter, the same bits everywhere do.
  const a = 3.141592653589793 / count;
  const t = a + (a * a * a) / 3 + (2 * a * a * a * a * a) / 15;
  const [c, s] = direction(t, 0);
  const result: Point[] = [[1, 0]];
  for (let i = 1; i < count; i++) {
    const [x, y] = result[i - 1]!;
    result.push([x * c - y * s, x * s + y * c]);
  }
  return result;
}

/** Cuts corners (Chaikin). An open line keeps its two ends. */
export function rounded(line: readonly Point[], rounds: number, isRing: boolean): Point[] {
  let points = [...line];
  for (let round = 0; round < rounds; round++) {
    const next: Point[] = isRing ? [] : [points[0]!];
    for (let i = 1; i < points.length; i++) {
      const a = points[i - 1]!;
      const b = points[i]!;
      if (isRing || i > 1) next.push(between(a, b, 0.25));
      if (isRing || i < points.length - 1) next.push(between(a, b, 0.75));
    }
    next.push(isRing ? next[0]! : points[points.length - 1]!);
    points = next;
  }
  return points;
}

/** Leaves out points that lie within `tolerance` metres of the line through their neighbours (Douglas-Peucker). */
export function simplified(line: readonly Point[], tolerance: number): Point[] {
  if (line.length < 3) return [...line];
  const keep = new Uint8Array(line.length);
  keep[0] = keep[line.length - 1] = 1;
  const open: [number, number][] = [[0, line.length - 1]];
  for (let span = open.pop(); span; span = open.pop()) {
    const [from, to] = span;
    let farthest = tolerance;
    let at = -1;
    for (let i = from + 1; i < to; i++) {
      const off = segmentDistance(line[i]!, line[from]!, line[to]!);
      if (off > farthest) {
        farthest = off;
        at = i;
      }
    }
    if (at < 0) continue;
    keep[at] = 1;
    open.push([from, at], [at, to]);
  }
  return line.filter((_, i) => keep[i]);
}

/** Share along a-b of the point nearest to p, from 0 to 1. */
export function shareAlong(p: Point, a: Point, b: Point): number {
  const dx = b[0] - a[0];
  const dy = b[1] - a[1];
  const square = dx * dx + dy * dy;
  if (square === 0) return 0;
  const share = ((p[0] - a[0]) * dx + (p[1] - a[1]) * dy) / square;
  return share < 0 ? 0 : share > 1 ? 1 : share;
}

export const segmentDistance = (p: Point, a: Point, b: Point): number =>
  distance(p, between(a, b, shareAlong(p, a, b)));

/** Whether a point lies inside a closed ring (even-odd rule). */
export function isInside([x, y]: Point, ring: readonly Point[]): boolean {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const [ax, ay] = ring[i]!;
    const [bx, by] = ring[j]!;
    if (ay > y !== by > y && x < ((bx - ax) * (y - ay)) / (by - ay) + ax) inside = !inside;
  }
  return inside;
}
