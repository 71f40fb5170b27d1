import Flatbush from 'flatbush';
import { between, distance, lengthOf, shareAlong, type Point } from './plane';
import type { StreetLine } from './street-line';

// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { floor, min, max, abs } = Math;

/** A stretch of a street between two junctions (or a junction and a dead end). */
export interface Stretch {
  readonly line: number;
  readonly from: number;
  readonly to: number;
  readonly points: readonly Point[];
}

export interface StreetGraph {
  /** Places of the junctions and ends. */
  readonly nodes: readonly Point[];
  readonly stretches: readonly Stretch[];
}

/** Ends and crossings nearer to each other than this are one junction, in metres. */
const SNAP = 6.5;
/** Dead ends shorter than this are left-overs of a crossing, in metres. */
const SHORTEST_END = 26;

interface Cut {
  readonly segment: number;
  readonly share: number;
  readonly node: number;
}

/**
 * Works out where streets meet: crossings are cut, ends are joined to what they touch, left-overs
 * are dropped, and what cannot be reached from the largest part is left out.
 */
export function findJunctions(lines: readonly StreetLine[]): StreetGraph {
  const nodes = new NodeBook();
  const cuts = findCuts(lines, nodes);
  const stretches: Stretch[] = [];
  lines.forEach((line, index) => {
    const own = cuts[index]!;
    own.sort((a, b) => a.segment - b.segment || a.share - b.share);
    for (let i = 1; i < own.length; i++) {
      const a = own[i - 1]!;
      const b = own[i]!;
      const inner = line.points.slice(a.segment + 1, b.segment + 1);
      const points = tidy([nodes.place(a.node), ...inner, nodes.place(b.node)]);
      const from = a.node;
      const to = b.node;
      if (from === to && lengthOf(points) < 60) continue;
      stretches.push({ line: index, from, to, points });
    }
  });
  return compact(nodes, largestPart(withoutLeftOvers(withoutTwins(stretches))));
}

/** Junction places; those within SNAP of each other become one. */
class NodeBook {
  private readonly places: Point[] = [];
  private readonly buckets = new Map<string, number[]>();

  add(p: Point): number {
    const i = floor(p[0] / SNAP);
    const j = floor(p[1] / SNAP);
    let nearest = -1;
    let least = SNAP;
    for (let dj = -1; dj <= 1; dj++) {
      for (let di = -1; di <= 1; di++) {
        for (const known of this.buckets.get(`${i + di},${j + dj}`) ?? []) {
          const off = distance(p, this.places[known]!);
          if (off < least) {
            least = off;
            nearest = known;
          }
        }
      }
    }
    if (nearest >= 0) return nearest;
    const id = this.places.length;
    this.places.push(p);
    const key = `${i},${j}`;
    const bucket = this.buckets.get(key);
    if (bucket) bucket.push(id);
    else this.buckets.set(key, [id]);
    return id;
  }

  place(id: number): Point {
    return this.places[id]!;
  }
}

function findCuts(lines: readonly StreetLine[], nodes: NodeBook): Cut[][] {
  const cuts: Cut[][] = lines.map(() => []);
  const owner: number[] = [];
  const segmentOf: number[] = [];
  lines.forEach((line, index) => {
    for (let s = 0; s < line.points.length - 1; s++) {
      owner.push(index);
      segmentOf.push(s);
    }
  });
  const index = new Flatbush(owner.length);
  const segment = (k: number): readonly [Point, Point] => {
    const { points } = lines[owner[k]!]!;
    return [points[segmentOf[k]!]!, points[segmentOf[k]! + 1]!];
  };
  for (let k = 0; k < owner.length; k++) {
    const [a, b] = segment(k);
    index.add(min(a[0], b[0]), min(a[1], b[1]), max(a[0], b[0]), max(a[1], b[1]));
  }
  index.finish();

  const cut = (k: number, share: number, p: Point): void => {
    cuts[owner[k]!]!.push({ segment: segmentOf[k]!, share, node: nodes.add(p) });
  };
  // Ends first: they are where a plan meant streets to meet, so they fix the junction's place.
  lines.forEach((line, number) => {
    const last = line.points.length - 1;
    for (const at of [0, last]) {
      const p = line.points[at]!;
      const node = nodes.add(p);
      cuts[number]!.push({ segment: at === 0 ? 0 : last - 1, share: at === 0 ? 0 : 1, node });
      for (const k of index
        .search(p[0] - SNAP, p[1] - SNAP, p[0] + SNAP, p[1] + SNAP)
        .sort((x, y) => x - y)) {
        if (owner[k] === number && abs(segmentOf[k]! - at) < 3) continue;
        if (line.isBridge !== lines[owner[k]!]!.isBridge && !isEndOf(lines[owner[k]!]!, p))
          continue;
        const [a, b] = segment(k);
        const share = shareAlong(p, a, b);
        if (distance(p, between(a, b, share)) < SNAP - 0.5)
          cuts[owner[k]!]!.push({ segment: segmentOf[k]!, share, node });
      }
    }
  });
  for (let k = 0; k < owner.length; k++) {
    const [a, b] = segment(k);
    const found = index.search(min(a[0], b[0]), min(a[1], b[1]), max(a[0], b[0]), max(a[1], b[1]));
    for (const other of found.sort((x, y) => x - y)) {
      if (other <= k) continue;
      if (owner[other] === owner[k] && abs(segmentOf[other]! - segmentOf[k]!) < 2) continue;
      // A road under a bridge does not meet it.
      if (lines[owner[k]!]!.isBridge !== lines[owner[other]!]!.isBridge) continue;
      const [c, d] = segment(other);
      const hit = crossing(a, b, c, d);
      if (!hit) continue;
      const p = between(a, b, hit.first);
      cut(k, hit.first, p);
      cut(other, hit.second, p);
    }
  }
  return cuts;
}

const isEndOf = (line: StreetLine, p: Point): boolean =>
  distance(line.points[0]!, p) < SNAP || distance(line.points[line.points.length - 1]!, p) < SNAP;

/** Where two segments cross, as shares along each. Touching counts. */
function crossing(
  a: Point,
  b: Point,
  c: Point,
  d: Point,
): { first: number; second: number } | null {
  const rx = b[0] - a[0];
  const ry = b[1] - a[1];
  const sx = d[0] - c[0];
  const sy = d[1] - c[1];
  const cross = rx * sy - ry * sx;
  if (abs(cross) < 1e-9) return null;
  const first = ((c[0] - a[0]) * sy - (c[1] - a[1]) * sx) / cross;
  const second = ((c[0] - a[0]) * ry - (c[1] - a[1]) * rx) / cross;
  const slack = 1e-9;
  return first >= -slack && first <= 1 + slack && second >= -slack && second <= 1 + slack
    ? { first, second }
    : null;
}

/** Leaves out points within 4 m of the one before; the ends stay. */
function tidy(points: readonly Point[]): Point[] {
  const result: Point[] = [points[0]!];
  const end = points[points.length - 1]!;
  for (let i = 1; i < points.length - 1; i++) {
    const p = points[i]!;
    if (distance(p, result[result.length - 1]!) > 4 && distance(p, end) > 4) result.push(p);
  }
  result.push(end);
  return result;
}

/** Of two stretches that join the same junctions at about the same length, the first stays. */
function withoutTwins(stretches: readonly Stretch[]): Stretch[] {
  const known = new Map<string, number[]>();
  return stretches.filter(({ from, to, points }) => {
    const key = from < to ? `${from}-${to}` : `${to}-${from}`;
    const length = lengthOf(points);
    const others = known.get(key) ?? [];
    if (others.some((other) => abs(other - length) < max(8, other * 0.06))) return false;
    known.set(key, [...others, length]);
    return true;
  });
}

function withoutLeftOvers(all: readonly Stretch[]): Stretch[] {
  let stretches = [...all];
  for (;;) {
    const degree = new Map<number, number>();
    for (const { from, to } of stretches)
      for (const node of [from, to]) degree.set(node, (degree.get(node) ?? 0) + 1);
    const kept = stretches.filter(
      ({ from, to, points }) =>
        lengthOf(points) >= SHORTEST_END || (degree.get(from)! > 1 && degree.get(to)! > 1),
    );
    if (kept.length === stretches.length) return stretches;
    stretches = kept;
  }
}

function largestPart(stretches: readonly Stretch[]): Stretch[] {
  const neighbours = new Map<number, number[]>();
  for (const { from, to } of stretches) {
    neighbours.set(from, [...(neighbours.get(from) ?? []), to]);
    neighbours.set(to, [...(neighbours.get(to) ?? []), from]);
  }
  const part = new Map<number, number>();
  const sizes: number[] = [];
  for (const start of neighbours.keys()) {
    if (part.has(start)) continue;
    const number = sizes.length;
    let size = 0;
    const open = [start];
    part.set(start, number);
    for (let node = open.pop(); node !== undefined; node = open.pop()) {
      size++;
      for (const next of neighbours.get(node) ?? []) {
        if (part.has(next)) continue;
        part.set(next, number);
        open.push(next);
      }
    }
    sizes.push(size);
  }
  const largest = sizes.indexOf(max(...sizes));
  return stretches.filter(({ from }) => part.get(from) === largest);
}

function compact(nodes: NodeBook, stretches: readonly Stretch[]): StreetGraph {
  const renamed = new Map<number, number>();
  const places: Point[] = [];
  const rename = (node: number): number => {
    const known = renamed.get(node);
    if (known !== undefined) return known;
    renamed.set(node, places.length);
    places.push(nodes.place(node));
    return places.length - 1;
  };
  return {
    stretches: stretches.map((stretch) => ({
      ...stretch,
      from: rename(stretch.from),
      to: rename(stretch.to),
    })),
    nodes: places,
  };
}
