import { isInRing } from '../point-in-ring';
import { EARTH_RADIUS_KM, type LonLat } from '../travel/great-circle';
import type { StormRoad } from './conditions';
import { NO_WAY, type RoadGraph } from './road-graph';

/** Which stretches of which segments the storm roads take. */
export interface StormCover {
  /** Stretches that nobody passes, as shares of the segment's length. */
  readonly cuts: ReadonlyMap<number, readonly [from: number, to: number]>;
  /** How many times as long a segment takes, 1 or more. */
  readonly slowness: ReadonlyMap<number, number>;
}

export const NO_COVER: StormCover = { cuts: new Map(), slowness: new Map() };

/** Roads are looked at in pieces of at most this length: how sharp the edge of a closure is. */
const PIECE_METRES = 20;
/** A line drawn along a road keeps within this of it: our estimate of a careful hand. */
const ALONG_METRES = 12;
/** Roads that lie less askew to a drawn line run along it: our estimate. */
const ALONG_COSINE = Math.cos((30 * Math.PI) / 180);
/** A line that ends or bends at a junction touches the side roads there; those it does not close. */
const JUNCTION_METRES = 15;
/** A shorter line is a stroke across a road, wherever it lies: our estimate. */
const STROKE_METRES = 40;

/**
 * Finds the roads that storm roads take. Two slow areas over one road do not add up: the slower counts.
 * Where several closures lie on one segment, what lies between them is closed as well.
 */
export function stormCover(graph: RoadGraph, roads: readonly StormRoad[]): StormCover {
  if (roads.length === 0) return NO_COVER;
  const cuts = new Map<number, [number, number]>();
  const slowness = new Map<number, number>();
  const boxes = segmentBoxes(graph);
  for (const road of roads) {
    for (const { segment, from, to, share } of stretchesOf(graph, boxes, road)) {
      if (road.kind === 'slow') {
        const speedShare = Math.min(1, Math.max(0.01, road.speedShare ?? 1));
        const slower = 1 - share + share / speedShare;
        slowness.set(segment, Math.max(slowness.get(segment) ?? 1, slower));
      } else {
        const cut = cuts.get(segment);
        cuts.set(segment, cut ? [Math.min(cut[0], from), Math.max(cut[1], to)] : [from, to]);
      }
    }
  }
  return { cuts, slowness };
}

interface Stretch {
  readonly segment: number;
  readonly from: number;
  readonly to: number;
  /** Share of the segment's length that is taken. */
  readonly share: number;
}

type Box = readonly [west: number, south: number, east: number, north: number];

function stretchesOf(graph: RoadGraph, boxes: Float64Array, road: StormRoad): Stretch[] {
  const { shape } = road;
  const points = shape.type === 'line' ? shape.points : shape.ring;
  if (points.length < 2) return [];
  const plane = new Plane(points[0]!);
  const box = boxAround(points, plane);
  const test =
    shape.type === 'line'
      ? lineTest(points.map((p) => plane.at(p)))
      : areaTest(points, plane, road.kind === 'slow');
  const found: Found[] = [];
  for (let segment = 0; segment < graph.segmentCount; segment++)
    if (overlaps(boxes, segment, box)) found.push(lookAt(graph, segment, plane, test));
  const all = (stretch: (one: Found) => Stretch | null): Stretch[] =>
    found.flatMap((one) => stretch(one) ?? []);
  const isStroke =
    shape.type === 'line' && lengthOf(points.map((p) => plane.at(p))) < STROKE_METRES;
  const likeliest = all(isStroke ? ({ across }) => across : ({ sure }) => sure);
  // Where nothing is, the other reading is meant: a short stretch, or a stroke close to a junction.
  return likeliest.length > 0 ? likeliest : all(({ sure, across }) => sure ?? across);
}

interface Found {
  /** What runs along a line or lies in an area, or crosses a line away from junctions. */
  readonly sure: Stretch | null;
  /** What crosses a line anywhere. */
  readonly across: Stretch | null;
}

type Metres = readonly [x: number, y: number];
type PieceTest = (a: Metres, b: Metres) => 'in' | 'across' | 'out';

function lookAt(graph: RoadGraph, segment: number, plane: Plane, test: PieceTest): Found {
  const line = lineOf(graph, segment).map((point) => plane.at(point));
  const lengths = lengthsOf(line);
  const total = Math.max(1e-6, lengthOf(line));
  const sure = new Gathered(segment, total);
  const across = new Gathered(segment, total);
  let gone = 0;
  lengths.forEach((length, i) => {
    const count = Math.max(1, Math.ceil(length / PIECE_METRES));
    for (let piece = 0; piece < count; piece++) {
      const a = between(line[i]!, line[i + 1]!, piece / count);
      const b = between(line[i]!, line[i + 1]!, (piece + 1) / count);
      const from = gone + (length * piece) / count;
      const to = gone + (length * (piece + 1)) / count;
      const found = test(a, b);
      const isAtEnd = from < JUNCTION_METRES || to > total - JUNCTION_METRES;
      if (found === 'in' || (found === 'across' && !isAtEnd)) sure.add(from, to);
      if (found === 'across') across.add(from, to);
    }
    gone += length;
  });
  return { sure: sure.stretch(), across: across.stretch() };
}

const lengthsOf = (line: readonly Metres[]): number[] =>
  line.slice(1).map((p, i) => Math.hypot(p[0] - line[i]![0], p[1] - line[i]![1]));
const lengthOf = (line: readonly Metres[]): number =>
  lengthsOf(line).reduce((sum, one) => sum + one, 0);

class Gathered {
  private first = Infinity;
  private last = -Infinity;
  private metres = 0;

  constructor(
    private readonly segment: number,
    private readonly total: number,
  ) {}

  add(from: number, to: number): void {
    this.first = Math.min(this.first, from);
    this.last = Math.max(this.last, to);
    this.metres += to - from;
  }

  stretch(): Stretch | null {
    const { segment, total, first, last, metres } = this;
    if (last < first) return null;
    return { segment, from: first / total, to: last / total, share: Math.min(1, metres / total) };
  }
}

/** @param isExact false for what must not be missed, however small the area is */
function areaTest(ring: readonly LonLat[], plane: Plane, isExact: boolean): PieceTest {
  const corners = ring.map((point) => plane.at(point));
  return (a, b) => {
    if (isInRing([(a[0] + b[0]) / 2, (a[1] + b[1]) / 2], corners)) return 'in';
    if (isExact) return 'out';
    return corners.some((c, i) => crosses(a, b, c, corners[(i + 1) % corners.length]!))
      ? 'in'
      : 'out';
  };
}

function lineTest(line: readonly Metres[]): PieceTest {
  return (a, b) => {
    const middle: Metres = [(a[0] + b[0]) / 2, (a[1] + b[1]) / 2];
    let isAcross = false;
    for (let i = 0; i + 1 < line.length; i++) {
      const [c, d] = [line[i]!, line[i + 1]!];
      const isAlong = cosine(a, b, c, d) >= ALONG_COSINE;
      // Beyond its two ends the line takes nothing.
      const away = distance(middle, c, d, i === 0, i + 2 === line.length);
      if (isAlong && away <= ALONG_METRES) return 'in';
      if (!isAlong && crosses(a, b, c, d)) isAcross = true;
    }
    return isAcross ? 'across' : 'out';
  };
}

function cosine(a: Metres, b: Metres, c: Metres, d: Metres): number {
  const [ux, uy, vx, vy] = [b[0] - a[0], b[1] - a[1], d[0] - c[0], d[1] - c[1]];
  const lengths = Math.hypot(ux, uy) * Math.hypot(vx, vy);
  return lengths === 0 ? 0 : Math.abs(ux * vx + uy * vy) / lengths;
}

function distance(p: Metres, c: Metres, d: Metres, isFirst: boolean, isLast: boolean): number {
  const [vx, vy] = [d[0] - c[0], d[1] - c[1]];
  const square = vx * vx + vy * vy;
  if (square === 0) return Infinity;
  const along = ((p[0] - c[0]) * vx + (p[1] - c[1]) * vy) / square;
  if ((isFirst && along < 0) || (isLast && along > 1)) return Infinity;
  const foot = between(c, d, Math.min(1, Math.max(0, along)));
  return Math.hypot(p[0] - foot[0], p[1] - foot[1]);
}

/** Whether two straight pieces meet, touching included. */
function crosses(a: Metres, b: Metres, c: Metres, d: Metres): boolean {
  const side = (p: Metres, q: Metres, r: Metres): number =>
    Math.sign((q[0] - p[0]) * (r[1] - p[1]) - (q[1] - p[1]) * (r[0] - p[0]));
  const [fromA, fromB] = [side(c, d, a), side(c, d, b)];
  // Two pieces of one line do not cross each other.
  if (fromA === 0 && fromB === 0) return false;
  return fromA * fromB <= 0 && side(a, b, c) * side(a, b, d) <= 0;
}

const between = (a: Metres, b: Metres, share: number): Metres => [
  a[0] + (b[0] - a[0]) * share,
  a[1] + (b[1] - a[1]) * share,
];

/** Metres on a plane that touches the earth near a point: good to a thousandth within a county. */
class Plane {
  private readonly east: number;
  private readonly north = (EARTH_RADIUS_KM * 1000 * Math.PI) / 180;

  constructor(private readonly origin: LonLat) {
    this.east = this.north * Math.cos((origin[1] * Math.PI) / 180);
  }

  at([lon, lat]: LonLat): Metres {
    return [(lon - this.origin[0]) * this.east, (lat - this.origin[1]) * this.north];
  }

  /** Degrees that are at least this many metres either way. */
  degrees(metres: number): number {
    return metres / Math.min(this.east, this.north);
  }
}

function boxAround(points: readonly LonLat[], plane: Plane): Box {
  const margin = plane.degrees(ALONG_METRES);
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const [lon, lat] of points) {
    west = Math.min(west, lon - margin);
    east = Math.max(east, lon + margin);
    south = Math.min(south, lat - margin);
    north = Math.max(north, lat + margin);
  }
  return [west, south, east, north];
}

/** West, south, east and north of every segment, in degrees. */
function segmentBoxes({ segmentCount, lineFirst, lineLon, lineLat }: RoadGraph): Float64Array {
  const boxes = new Float64Array(segmentCount * 4);
  for (let segment = 0; segment < segmentCount; segment++) {
    let [west, south, east, north] = [NO_WAY * 4, NO_WAY * 4, -NO_WAY * 4, -NO_WAY * 4];
    for (let i = lineFirst[segment]!; i < lineFirst[segment + 1]!; i++) {
      west = Math.min(west, lineLon[i]!);
      east = Math.max(east, lineLon[i]!);
      south = Math.min(south, lineLat[i]!);
      north = Math.max(north, lineLat[i]!);
    }
    boxes.set([west / 1e7, south / 1e7, east / 1e7, north / 1e7], segment * 4);
  }
  return boxes;
}

const overlaps = (boxes: Float64Array, segment: number, [west, south, east, north]: Box): boolean =>
  boxes[segment * 4]! <= east &&
  boxes[segment * 4 + 2]! >= west &&
  boxes[segment * 4 + 1]! <= north &&
  boxes[segment * 4 + 3]! >= south;

/** A segment's line in degrees, in the direction in which it was mapped. */
export function lineOf({ lineFirst, lineLon, lineLat }: RoadGraph, segment: number): LonLat[] {
  const line: LonLat[] = [];
  for (let i = lineFirst[segment]!; i < lineFirst[segment + 1]!; i++)
    line.push([lineLon[i]! / 1e7, lineLat[i]! / 1e7]);
  return line;
}
