import Flatbush from 'flatbush';
import { CheapestFirst } from '../../server/region/county/least-cost';
import { gap, roadGraph, type RoadGraph, type Spot } from './road-graph';
import type { ReadOsm } from './region-files';

export interface Spread {
  readonly p10: number;
  readonly p50: number;
  readonly p90: number;
}

/** What can be compared between one region's streets and another's. */
export interface RoadMeasures {
  readonly junctions: number;
  readonly kilometres: number;
  /** Shares of the junctions at which 1, 3, 4 and more street ends meet. */
  readonly degree: { readonly 1: number; readonly 3: number; readonly 4: number; more: number };
  readonly meanDegree: number;
  /** Metres from one junction to the next. */
  readonly block: Spread;
  /** Shortest way over straight line, one-way streets observed, for pairs nearer and farther than 4 km. */
  readonly near: Spread;
  readonly far: Spread;
  readonly addressesPerKm: number;
  /** Share of the junctions that can be reached from each other, one-way streets observed. */
  readonly connected: number;
  readonly shortestSegment: number;
  readonly closestJunctions: number;
}

const FAR = 4_000;
const SOURCES = 30;

export function roadMeasures(osm: ReadOsm): RoadMeasures {
  const graph = roadGraph(osm);
  const degrees = degreesOf(graph);
  const share = (is: (degree: number) => boolean): number =>
    [...degrees.values()].filter(is).length / degrees.size;
  const metres = graph.blocks.map((block) => block.metres);
  const kilometres = metres.reduce((sum, m) => sum + m, 0) / 1_000;
  const { near, far } = circuity(graph);
  return {
    junctions: degrees.size,
    kilometres,
    degree: {
      1: share((d) => d === 1),
      3: share((d) => d === 3),
      4: share((d) => d === 4),
      more: share((d) => d > 4),
    },
    meanDegree: [...degrees.values()].reduce((sum, d) => sum + d, 0) / degrees.size,
    block: spread(metres),
    near,
    far,
    addressesPerKm: addressCount(osm) / kilometres,
    connected: largestMutual(graph).size / degrees.size,
    shortestSegment: graph.shortestSegment,
    closestJunctions: closest([...graph.junctions.values()]),
  };
}

function degreesOf({ junctions, blocks }: RoadGraph): Map<number, number> {
  const degrees = new Map([...junctions.keys()].map((node) => [node, 0]));
  for (const { from, to } of blocks)
    for (const node of [from, to]) degrees.set(node, degrees.get(node)! + 1);
  return degrees;
}

export function spread(values: readonly number[]): Spread {
  const sorted = [...values].sort((a, b) => a - b);
  const at = (share: number): number => sorted[Math.floor((sorted.length - 1) * share)] ?? NaN;
  return { p10: at(0.1), p50: at(0.5), p90: at(0.9) };
}

/** Points and buildings with a house number, each number once. */
function addressCount({ nodes, ways }: ReadOsm): number {
  let count = 0;
  for (const { tags } of nodes.values()) if (tags['addr:housenumber'] && !tags['name']) count++;
  for (const { tags } of ways) if (tags['addr:housenumber']) count++;
  return count;
}

type Arcs = ReadonlyMap<number, readonly { readonly to: number; readonly metres: number }[]>;

function arcsOf({ junctions, blocks }: RoadGraph, reversed = false): Arcs {
  const arcs = new Map(
    [...junctions.keys()].map((node) => [node, [] as { to: number; metres: number }[]]),
  );
  for (const { from, to, metres, forward, backward } of blocks) {
    if (reversed ? backward : forward) arcs.get(from)!.push({ to, metres });
    if (reversed ? forward : backward) arcs.get(to)!.push({ to: from, metres });
  }
  return arcs;
}

/** All junctions that can be reached from and can reach the one with the most company (Kosaraju's idea, from several starts). */
export function largestMutual(graph: RoadGraph): Set<number> {
  const [onward, back] = [arcsOf(graph), arcsOf(graph, true)];
  const reach = (start: number, arcs: Arcs): Set<number> => {
    const seen = new Set([start]);
    for (const node of seen) for (const { to } of arcs.get(node)!) seen.add(to);
    return seen;
  };
  const left = new Set(graph.junctions.keys());
  let largest = new Set<number>();
  for (const start of left) {
    const from = reach(start, onward);
    const to = reach(start, back);
    const mutual = new Set([...from].filter((node) => to.has(node)));
    for (const node of mutual) left.delete(node);
    if (mutual.size > largest.size) largest = mutual;
    if (largest.size > left.size) break;
  }
  return largest;
}

function circuity(graph: RoadGraph): { near: Spread; far: Spread } {
  const arcs = arcsOf(graph);
  const mutual = [...largestMutual(graph)].sort((a, b) => a - b);
  const near: number[] = [];
  const far: number[] = [];
  for (let k = 0; k < SOURCES; k++) {
    const source = mutual[Math.floor(((k + 0.5) / SOURCES) * mutual.length)]!;
    const ways = shortest(source, arcs);
    const start = graph.junctions.get(source)!;
    for (let i = k; i < mutual.length; i += 7) {
      const straight = gap(start, graph.junctions.get(mutual[i]!)!);
      const way = ways.get(mutual[i]!);
      if (straight < 200 || way === undefined) continue;
      (straight > FAR ? far : near).push(way / straight);
    }
  }
  return { near: spread(near), far: spread(far) };
}

/** Dijkstra's shortest ways from one junction, in metres. */
function shortest(source: number, arcs: Arcs): Map<number, number> {
  const best = new Map([[source, 0]]);
  const open = new CheapestFirst();
  open.push(0, source);
  for (let top = open.pop(); top; top = open.pop()) {
    if (top.cost > best.get(top.item)!) continue;
    for (const { to, metres } of arcs.get(top.item)!) {
      const cost = top.cost + metres;
      if (cost >= (best.get(to) ?? Infinity)) continue;
      best.set(to, cost);
      open.push(cost, to);
    }
  }
  return best;
}

function closest(spots: readonly Spot[]): number {
  const index = new Flatbush(spots.length);
  for (const [x, y] of spots) index.add(x, y);
  index.finish();
  let least = Infinity;
  spots.forEach((spot) => {
    const other = index.neighbors(spot[0], spot[1], 2)[1];
    if (other !== undefined) least = Math.min(least, gap(spot, spots[other]!));
  });
  return least;
}
