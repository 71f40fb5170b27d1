import type { LonLat, OsmExtract } from './osm-extract';
import type { OsmRelation, OsmWay } from './osm-model';

/** Outer ring first, then its holes; each closed. */
export type PolygonRings = LonLat[][];

/**
 * Joins ways end to end by the nodes that they share.
 *
 * @param mayTurn whether a way may be used backwards; coastlines must not
 */
export function stitched(ways: readonly (readonly number[])[], mayTurn: boolean): number[][] {
  const open = new Set(ways.map((_, i) => i));
  const starts = new Map<number, number[]>();
  const note = (node: number, way: number): void => {
    const known = starts.get(node);
    if (known) known.push(way);
    else starts.set(node, [way]);
  };
  ways.forEach((refs, i) => {
    note(refs[0]!, i);
    if (mayTurn) note(refs[refs.length - 1]!, i);
  });
  const hasBefore = new Set(ways.map((refs) => refs[refs.length - 1]!));
  const chains: number[][] = [];
  const follow = (first: number): void => {
    open.delete(first);
    const chain = [...ways[first]!];
    for (;;) {
      const end = chain[chain.length - 1]!;
      if (end === chain[0]) break;
      const next = starts.get(end)?.find((way) => open.has(way));
      if (next === undefined) break;
      open.delete(next);
      const refs = ways[next]!;
      chain.push(...(refs[0] === end ? refs : [...refs].reverse()).slice(1));
    }
    chains.push(chain);
  };
  // Chains that begin nowhere else come first, so that an open chain is found from its beginning.
  if (!mayTurn)
    ways.forEach((refs, i) => void (open.has(i) && !hasBefore.has(refs[0]!) && follow(i)));
  ways.forEach((_, i) => void (open.has(i) && follow(i)));
  return mayTurn ? joinedBackwards(chains) : chains;
}

/** Two chains that both begin at one node (found from their middles) become one. */
function joinedBackwards(chains: number[][]): number[][] {
  const result: number[][] = [];
  for (let chain of chains) {
    const isClosed = chain[0] === chain[chain.length - 1];
    const at = isClosed
      ? -1
      : result.findIndex(
          (other) =>
            other[0] !== other[other.length - 1] &&
            (other[0] === chain[0] || other[0] === chain[chain.length - 1]),
        );
    if (at >= 0) {
      const [other] = result.splice(at, 1) as [number[]];
      if (other[0] === chain[0]) chain = [...chain].reverse();
      chain = [...chain, ...other.slice(1)];
    }
    result.push(chain);
  }
  return result;
}

/** A closed way as a polygon; null when it is not closed or the extract lacks too many of its nodes. */
export function ringOf(extract: OsmExtract, refs: readonly number[]): LonLat[] | null {
  if (refs.length < 4 || refs[0] !== refs[refs.length - 1]) return null;
  const ring = refs.flatMap((ref) => {
    const at = extract.at(ref);
    return at ? [at] : [];
  });
  // A ring with gaps would be closed by straight lines across the map.
  return ring.length === refs.length ? ring : null;
}

/** The polygons of a multipolygon relation. Rings that the extract cut open are left out. */
export function polygonsOf(extract: OsmExtract, relation: OsmRelation): PolygonRings[] {
  const waysOf = (isInner: boolean): OsmWay[] =>
    relation.members.flatMap(({ type, ref, role }) => {
      const way =
        type === 'way' && (role === 'inner') === isInner ? extract.ways.get(ref) : undefined;
      return way && way.refs.length > 1 ? [way] : [];
    });
  const closed = (ways: readonly OsmWay[]): LonLat[][] =>
    stitched(
      ways.map(({ refs }) => refs),
      true,
    ).flatMap((refs) => {
      const ring = ringOf(extract, refs);
      return ring ? [ring] : [];
    });
  return withHoles(closed(waysOf(false)), closed(waysOf(true)));
}

/** Gives each hole to the smallest outer ring around it. */
export function withHoles(outers: readonly LonLat[][], holes: readonly LonLat[][]): PolygonRings[] {
  const polygons = outers
    .map((outer) => ({ outer, area: Math.abs(signedArea(outer)), holes: [] as LonLat[][] }))
    .sort((a, b) => a.area - b.area);
  for (const hole of holes)
    polygons.find(({ outer }) => isInsideRing(hole[0]!, outer))?.holes.push(hole);
  return polygons.map(({ outer, holes: own }) => [outer, ...own]);
}

/** Above zero when the ring runs counter-clockwise. */
export function signedArea(ring: readonly LonLat[]): number {
  let twice = 0;
  for (let i = 1; i < ring.length; i++) {
    const a = ring[i - 1]!;
    const b = ring[i]!;
    twice +=
      (a[0] - ring[0]![0]) * (b[1] - ring[0]![1]) - (b[0] - ring[0]![0]) * (a[1] - ring[0]![1]);
  }
  return twice / 2;
}

export function isInsideRing([x, y]: LonLat, ring: readonly LonLat[]): boolean {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const [ax, ay] = ring[i]!;
    const [bx, by] = ring[j]!;
    if (ay > y !== by > y && x < ((bx - ax) * (y - ay)) / (by - ay) + ax) inside = !inside;
  }
  return inside;
}

/** A point well inside a ring: its centroid, or the middle of its widest stretch at that height. */
export function innerPoint(ring: readonly LonLat[]): LonLat {
  let area = 0;
  let x = 0;
  let y = 0;
  const [ox, oy] = ring[0]!;
  for (let i = 1; i < ring.length; i++) {
    const [ax, ay] = [ring[i - 1]![0] - ox, ring[i - 1]![1] - oy];
    const [bx, by] = [ring[i]![0] - ox, ring[i]![1] - oy];
    const cross = ax * by - bx * ay;
    area += cross;
    x += (ax + bx) * cross;
    y += (ay + by) * cross;
  }
  const centroid: LonLat = area === 0 ? ring[0]! : [ox + x / (3 * area), oy + y / (3 * area)];
  if (isInsideRing(centroid, ring)) return centroid;
  const height = centroid[1];
  const crossings: number[] = [];
  for (let i = 1; i < ring.length; i++) {
    const a = ring[i - 1]!;
    const b = ring[i]!;
    if (a[1] > height !== b[1] > height)
      crossings.push(a[0] + ((height - a[1]) / (b[1] - a[1])) * (b[0] - a[0]));
  }
  crossings.sort((p, q) => p - q);
  let best = centroid;
  let widest = 0;
  for (let i = 1; i < crossings.length; i += 2) {
    const width = crossings[i]! - crossings[i - 1]!;
    if (width > widest) {
      widest = width;
      best = [(crossings[i]! + crossings[i - 1]!) / 2, height];
    }
  }
  return best;
}
