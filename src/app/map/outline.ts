import type { LonLat } from '@shared/contract/common';

/**
 * The outline of an outage area while somebody draws or changes it. The first corner is not
 * repeated at the end. Every step gives a new outline, so that undoing is keeping the old ones.
 */
export interface Outline {
  readonly corners: readonly LonLat[];
  /** Whether it has been finished: then corners are moved, not added at the end. */
  readonly isClosed: boolean;
  /** The corner that the arrow keys, or the next click, move. */
  readonly selected: number | null;
}

export const EMPTY_OUTLINE: Outline = { corners: [], isClosed: false, selected: null };
export const LEAST_CORNERS = 3;
/** The contract allows 500 points, the first of them twice. */
export const MOST_CORNERS = 499;

/** From a closed ring in GeoJSON's order, as an area has it. */
export const outlineOf = (ring: readonly LonLat[]): Outline => ({
  corners: ring.slice(0, -1),
  isClosed: true,
  selected: null,
});

/** As the contract wants it; `null` as long as it encloses nothing. */
export function ringOf({ corners }: Outline): LonLat[] | null {
  const [first] = corners;
  if (!first || corners.length < LEAST_CORNERS) return null;
  return [...corners, first].map(([lon, lat]) => [rounded(lon), rounded(lat)]);
}

/** A millionth of a degree is a hand's breadth. */
const rounded = (degrees: number): number => Math.round(degrees * 1e6) / 1e6;

export function addCorner(outline: Outline, corner: LonLat): Outline {
  if (outline.isClosed || outline.corners.length >= MOST_CORNERS) return outline;
  return { ...outline, corners: [...outline.corners, corner] };
}

export const canClose = ({ corners, isClosed }: Outline): boolean =>
  !isClosed && corners.length >= LEAST_CORNERS;

export const closed = (outline: Outline): Outline =>
  canClose(outline) ? { ...outline, isClosed: true, selected: null } : outline;

export const select = (outline: Outline, selected: number | null): Outline => ({
  ...outline,
  selected: selected !== null && outline.corners[selected] ? selected : null,
});

/** The next corner along the outline, or the one before; the first when none is selected. */
export function selectNext(outline: Outline, step: 1 | -1): Outline {
  const { corners, selected } = outline;
  if (corners.length === 0) return outline;
  if (selected === null) return select(outline, step === 1 ? 0 : corners.length - 1);
  return select(outline, (selected + step + corners.length) % corners.length);
}

export const moveCorner = (outline: Outline, index: number, to: LonLat): Outline => ({
  ...outline,
  corners: outline.corners.map((corner, i) => (i === index ? to : corner)),
});

/** Puts a new corner on the edge that begins at `after`, and selects it. */
export function insertCorner(outline: Outline, after: number, corner: LonLat): Outline {
  const { corners } = outline;
  if (corners.length >= MOST_CORNERS) return outline;
  return {
    ...outline,
    corners: [...corners.slice(0, after + 1), corner, ...corners.slice(after + 1)],
    selected: after + 1,
  };
}

/** Takes a corner away; a finished outline keeps at least three. */
export function removeCorner(outline: Outline, index: number): Outline {
  const { corners, isClosed } = outline;
  if (isClosed && corners.length <= LEAST_CORNERS) return outline;
  return { ...outline, corners: corners.filter((_, i) => i !== index), selected: null };
}

/** The middle of each edge, where a new corner can be pulled out. */
export function midpoints({ corners, isClosed }: Outline): LonLat[] {
  if (!isClosed) return [];
  return corners.map((from, i) => {
    const to = corners[(i + 1) % corners.length] ?? from;
    return [(from[0] + to[0]) / 2, (from[1] + to[1]) / 2];
  });
}

/**
 * Whether two edges of the outline cross. Areas are a few miles wide, so the plane is good enough.
 * An outline that is still open is looked at without its last edge.
 */
export function crossesItself({ corners, isClosed }: Outline): boolean {
  const edges = isClosed ? corners.length : corners.length - 1;
  const corner = (i: number): LonLat => corners[i % corners.length] ?? [0, 0];
  for (let i = 0; i < edges; i++) {
    for (let j = i + 1; j < edges; j++) {
      const areNeighbours = j === i + 1 || (isClosed && i === 0 && j === edges - 1);
      if (areNeighbours) continue;
      if (edgesCross(corner(i), corner(i + 1), corner(j), corner(j + 1))) return true;
    }
  }
  return false;
}

function edgesCross(a: LonLat, b: LonLat, c: LonLat, d: LonLat): boolean {
  const abc = side(a, b, c);
  const abd = side(a, b, d);
  const cda = side(c, d, a);
  const cdb = side(c, d, b);
  if (abc !== abd && cda !== cdb) return true;
  return (
    (abc === 0 && isBetween(a, b, c)) ||
    (abd === 0 && isBetween(a, b, d)) ||
    (cda === 0 && isBetween(c, d, a)) ||
    (cdb === 0 && isBetween(c, d, b))
  );
}

/** On which side of the line from `a` to `b` the point lies: 1, -1, or 0 on it. */
const side = (a: LonLat, b: LonLat, point: LonLat): number =>
  Math.sign((b[0] - a[0]) * (point[1] - a[1]) - (b[1] - a[1]) * (point[0] - a[0]));

const isBetween = (a: LonLat, b: LonLat, point: LonLat): boolean =>
  Math.min(a[0], b[0]) <= point[0] &&
  point[0] <= Math.max(a[0], b[0]) &&
  Math.min(a[1], b[1]) <= point[1] &&
  point[1] <= Math.max(a[1], b[1]);
