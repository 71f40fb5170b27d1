import { BandedRing, isInRing } from './point-in-ring';

/** Longitude and latitude in degrees. */
type Place = readonly [number, number];
/** Closed: the last point repeats the first. */
export type OutageRing = readonly Place[];
/** The ground of an outage area as the coordinates of a GeoJSON MultiPolygon: parts of an outer ring and holes. */
export type OutageShape = readonly (readonly OutageRing[])[];

/** Points of all rings together. An area along a county's shore needs some hundreds. */
export const MOST_SHAPE_POINTS = 4000;

interface Box {
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
}

/** Inside the outer ring of a part and in none of its holes. On an edge it may fall either way. */
export const isInShape = (place: Place, shape: OutageShape): boolean =>
  shape.some(
    ([outer, ...holes]) =>
      outer !== undefined && isInRing(place, outer) && !holes.some((hole) => isInRing(place, hole)),
  );

/**
 * Answers for many places in which of some areas each of them lies, in the order of the areas; as
 * `isInShape` does for one. Most areas are ruled out by their bounds alone, and of the others only the
 * edges at the place's own latitude are looked at.
 */
export function shapeFinder<A extends { readonly shape: OutageShape }>(
  areas: readonly A[],
): (place: Place) => A[] {
  const parts = areas.flatMap((area) =>
    area.shape.map(([outer, ...holes]) => ({
      area,
      outer: new BandedRing(outer ?? []),
      holes: holes.map((hole) => new BandedRing(hole)),
    })),
  );
  return (place) => {
    const x = place[0];
    const y = place[1];
    const found: A[] = [];
    for (const part of parts) {
      if (!part.outer.contains(x, y) || part.holes.some((hole) => hole.contains(x, y))) continue;
      // An area may have two parts here when they touch.
      if (found.at(-1) !== part.area) found.push(part.area);
    }
    return found;
  };
}

/** Whether two shapes share ground, be it that one lies inside the other. Touching is not enough. */
export function shapesOverlap(a: OutageShape, b: OutageShape): boolean {
  return a.some((mine) => b.some((theirs) => partsOverlap(mine, theirs)));
}

function partsOverlap(a: readonly OutageRing[], b: readonly OutageRing[]): boolean {
  const [outerA, outerB] = [a[0] ?? [], b[0] ?? []];
  const [boxA, boxB] = [boxOf(outerA), boxOf(outerB)];
  if (boxA.east <= boxB.west || boxB.east <= boxA.west) return false;
  if (boxA.north <= boxB.south || boxB.north <= boxA.south) return false;
  if (a.some((ringA) => b.some((ringB) => ringsCross(ringA, ringB)))) return true;
  // Without a crossing a ring lies inside as a whole or outside as a whole.
  return [innerPlace(a), innerPlace(b)].some(
    (place) => place !== null && isInShape(place, [a]) && isInShape(place, [b]),
  );
}

/** A place well inside a part: the middle of its widest stretch, halfway between south and north. */
function innerPlace(part: readonly OutageRing[]): Place | null {
  const { south, north } = boxOf(part[0] ?? []);
  // Off the half, where corners of drawn squares like to lie.
  const y = south + (north - south) * 0.4871;
  const crossings = part
    .flatMap((ring) => edgesOf(ring, 0))
    .filter(({ from, to }) => from[1] > y !== to[1] > y)
    .map(({ from, to }) => from[0] + ((y - from[1]) / (to[1] - from[1])) * (to[0] - from[0]))
    .sort((one, other) => one - other);
  let widest: readonly [number, number] | null = null;
  for (let i = 0; i + 1 < crossings.length; i += 2) {
    const [left = 0, right = 0] = crossings.slice(i, i + 2);
    if (!widest || right - left > widest[1] - widest[0]) widest = [left, right];
  }
  return widest && [(widest[0] + widest[1]) / 2, y];
}

interface Edge extends Box {
  readonly from: Place;
  readonly to: Place;
  readonly ring: number;
}

/** Whether any edges of a part's rings cross, of one ring or of two. Touching is no crossing. */
export const crossesItself = (rings: readonly OutageRing[]): boolean =>
  hasCrossing(rings.flatMap((ring) => edgesOf(ring, 0)));

const ringsCross = (a: OutageRing, b: OutageRing): boolean =>
  hasCrossing([...edgesOf(a, 0), ...edgesOf(b, 1)], true);

const edgesOf = (ring: OutageRing, index: number): Edge[] =>
  ring.slice(1).map((to, i) => {
    const from = ring[i] ?? to;
    return { from, to, ring: index, ...boxOf([from, to]) };
  });

/** From west to east: only edges that overlap in longitude are looked at together. */
function hasCrossing(edges: Edge[], onlyBetweenRings = false): boolean {
  edges.sort((a, b) => a.west - b.west);
  let open: Edge[] = [];
  for (const edge of edges) {
    open = open.filter(({ east }) => east >= edge.west);
    for (const other of open) {
      if (onlyBetweenRings && other.ring === edge.ring) continue;
      if (other.north < edge.south || edge.north < other.south) continue;
      if (doCross(edge, other)) return true;
    }
    open.push(edge);
  }
  return false;
}

const doCross = (a: Edge, b: Edge): boolean =>
  side(a, b.from) * side(a, b.to) < 0 && side(b, a.from) * side(b, a.to) < 0;

/** On which side of the edge's line a place lies: 1, -1, or 0 on it. */
const side = ({ from, to }: Edge, [x, y]: Place): number =>
  Math.sign((to[0] - from[0]) * (y - from[1]) - (to[1] - from[1]) * (x - from[0]));

function boxOf(ring: OutageRing): Box {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const [lon, lat] of ring) {
    west = Math.min(west, lon);
    south = Math.min(south, lat);
    east = Math.max(east, lon);
    north = Math.max(north, lat);
  }
  return { west, south, east, north };
}
