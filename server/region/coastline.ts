import type { LonLat, OsmExtract } from './osm-extract';
import { isInsideRing, signedArea, stitched, withHoles, type PolygonRings } from './rings';

type Box = readonly [west: number, south: number, east: number, north: number];

/**
 * The land of an extract, from its `natural=coastline` ways: stitched, cut at the extract's box and
 * closed along its edge. OpenStreetMap draws coastlines with land on their left, so land rings run
 * counter-clockwise. Empty when the extract has no coastline: then all of it is land.
 */
export function landOf(extract: OsmExtract): PolygonRings[] {
  const ways = [...extract.ways.values()].filter(
    ({ tags, refs }) => tags['natural'] === 'coastline' && refs.length > 1,
  );
  if (ways.length === 0) return [];
  const chains = stitched(
    ways.map(({ refs }) => refs),
    false,
  );
  const islands: LonLat[][] = [];
  const holes: LonLat[][] = [];
  const shores: LonLat[][] = [];
  for (const refs of chains) {
    const isClosed = refs[0] === refs[refs.length - 1];
    const line = refs.flatMap((ref) => {
      const at = extract.at(ref);
      return at ? [at] : [];
    });
    if (line.length < 2) continue;
    if (!isClosed || line.length < refs.length) shores.push(line);
    else (signedArea(line) > 0 ? islands : holes).push(line);
  }
  const mainland = closedAlongBox(
    shores.flatMap((line) => cutToBox(line, extract.bbox)),
    extract.bbox,
  );
  const outers = [...mainland, ...islands];
  // Coast that runs clockwise bounds water; with no land around it, everything else is land.
  if (holes.some((hole) => !outers.some((outer) => isInsideRing(hole[0]!, outer))))
    outers.push(boxRing(extract.bbox));
  return withHoles(outers, holes);
}

const boxRing = ([west, south, east, north]: Box): LonLat[] => [
  [west, south],
  [east, south],
  [east, north],
  [west, north],
  [west, south],
];

/** The pieces of a line inside a box; each begins and ends on its edge. */
export function cutToBox(line: readonly LonLat[], box: Box): LonLat[][] {
  const pieces: LonLat[][] = [];
  let piece: LonLat[] = [];
  for (let i = 1; i < line.length; i++) {
    const cut = cutSegment(line[i - 1]!, line[i]!, box);
    if (!cut) {
      if (piece.length > 1) pieces.push(piece);
      piece = [];
      continue;
    }
    if (piece.length === 0) piece.push(cut[0]);
    piece.push(cut[1]);
    const leaves = cut[1][0] !== line[i]![0] || cut[1][1] !== line[i]![1];
    if (leaves) {
      pieces.push(piece);
      piece = [];
    }
  }
  if (piece.length > 1) pieces.push(piece);
  // Where the extract ends before its box does, the shore is carried straight to the nearest edge.
  return pieces.map((points) => {
    const first = points[0]!;
    const last = points[points.length - 1]!;
    const head = isOnEdge(first, box) ? [] : [nearestOnEdge(first, box)];
    const tail = isOnEdge(last, box) ? [] : [nearestOnEdge(last, box)];
    return [...head, ...points, ...tail];
  });
}

/** The part of a segment inside a box (Liang and Barsky); null when there is none. */
function cutSegment(
  a: LonLat,
  b: LonLat,
  [west, south, east, north]: Box,
): [LonLat, LonLat] | null {
  const dx = b[0] - a[0];
  const dy = b[1] - a[1];
  let from = 0;
  let to = 1;
  for (const [p, q] of [
    [-dx, a[0] - west],
    [dx, east - a[0]],
    [-dy, a[1] - south],
    [dy, north - a[1]],
  ] as const) {
    if (p === 0) {
      if (q < 0) return null;
      continue;
    }
    const share = q / p;
    if (p < 0) from = Math.max(from, share);
    else to = Math.min(to, share);
  }
  if (from >= to) return null;
  const at = (share: number): LonLat => [a[0] + dx * share, a[1] + dy * share];
  return [from === 0 ? a : at(from), to === 1 ? b : at(to)];
}

const EDGE_TOLERANCE = 1e-9;

const isOnEdge = ([x, y]: LonLat, [west, south, east, north]: Box): boolean =>
  [x - west, east - x, y - south, north - y].some((off) => Math.abs(off) < EDGE_TOLERANCE);

function nearestOnEdge([x, y]: LonLat, [west, south, east, north]: Box): LonLat {
  const choices: [number, LonLat][] = [
    [Math.abs(x - west), [west, y]],
    [Math.abs(east - x), [east, y]],
    [Math.abs(y - south), [x, south]],
    [Math.abs(north - y), [x, north]],
  ];
  return choices.sort((a, b) => a[0] - b[0])[0]![1];
}

/** Place along the box's edge, counter-clockwise from the south-west corner, 0 to 4. */
function alongEdge([x, y]: LonLat, [west, south, east, north]: Box): number {
  const u = (x - west) / (east - west || 1);
  const v = (y - south) / (north - south || 1);
  const sides: [number, number][] = [
    [Math.abs(v), u],
    [Math.abs(1 - u), 1 + v],
    [Math.abs(1 - v), 2 + (1 - u)],
    [Math.abs(u), 3 + (1 - v)],
  ];
  return sides.sort((a, b) => a[0] - b[0])[0]![1];
}

/** Joins shores to closed rings: from where one leaves the box, on along the edge to where the next comes in. */
function closedAlongBox(pieces: readonly LonLat[][], box: Box): LonLat[][] {
  const corners = boxRing(box);
  const shores = pieces.map((points) => ({
    points,
    start: alongEdge(points[0]!, box),
    end: alongEdge(points[points.length - 1]!, box),
  }));
  const open = new Set(shores);
  const rings: LonLat[][] = [];
  for (const first of shores) {
    if (!open.has(first)) continue;
    const ring: LonLat[] = [];
    let shore = first;
    for (;;) {
      open.delete(shore);
      ring.push(...shore.points);
      const gap = (start: number): number => (start - shore.end + 4) % 4;
      let next = first;
      for (const candidate of open) if (gap(candidate.start) < gap(next.start)) next = candidate;
      const length = gap(next.start);
      for (let k = 1; k <= 4; k++) {
        const corner = (Math.floor(shore.end) + k) % 4;
        if (((corner - shore.end + 4) % 4 || 4) < length) ring.push(corners[corner]!);
      }
      if (next === first) break;
      shore = next;
    }
    ring.push(ring[0]!);
    if (ring.length > 3) rings.push(ring);
  }
  return rings;
}
