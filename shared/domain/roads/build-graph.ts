import { eliminate, type Neighbours } from './elimination-order';
import { stackUp, type StoredHierarchy } from './hierarchy';
import type { RoadGraph } from './road-graph';
import { largestStrongPart } from './strong-part';

/** A stretch of road between two junctions, as the map gives it. */
export interface Segment {
  readonly from: number;
  readonly to: number;
  /** Milliseconds along the line and against it; 0 where it may not be driven that way. */
  readonly alongMs: number;
  readonly againstMs: number;
  readonly dm: number;
  readonly roadClass: number;
  readonly flags: number;
  readonly name: number;
  /** Both ends included, in 1e-7 degrees. */
  readonly lons: readonly number[];
  readonly lats: readonly number[];
}

export interface SegmentsAndTurns {
  readonly junctions: number;
  readonly segments: readonly Segment[];
  /** For a lane (2 × segment, + 1 against the line) the lanes that nobody may turn into from its end. */
  readonly bannedTurns: ReadonlyMap<number, ReadonlySet<number>>;
}

export interface BuiltRoads {
  readonly graph: RoadGraph;
  readonly stored: StoredHierarchy;
  /** The numbers that the graph's segments had on the map; those that are missing were left out. */
  readonly kept: Int32Array;
  /** Segments that are not joined to the rest in both directions, and so were left out. */
  readonly leftOut: number;
}

/**
 * Makes the graph of a region's roads: nodes with their turns, the largest part in which everybody can
 * get everywhere and back, and the hierarchy over it.
 */
export function buildRoads(map: SegmentsAndTurns): BuiltRoads {
  const raw = withTurns(map);
  const inside = largestStrongPart(...outward(raw));
  const joined = raw.arcs.filter(({ tail, head }) => inside[tail]! && inside[head]!);
  const segmentNumber = numbered(
    map.segments.length,
    joined.map(({ lane }) => lane >> 1),
  );
  const nodeNumber = numbered(
    raw.nodes,
    joined.flatMap(({ tail, head }) => [tail, head]),
  );
  const arcs = joined.map(({ tail, head, lane }): Arc => ({
    tail: nodeNumber.of[tail]!,
    head: nodeNumber.of[head]!,
    lane: segmentNumber.of[lane >> 1]! * 2 + (lane & 1),
  }));
  const elimination = eliminate(neighbours(nodeNumber.count, arcs));
  const rank = new Int32Array(nodeNumber.count);
  elimination.order.forEach((node, at) => (rank[node] = at));
  const ranked = arcs
    .map(({ tail, head, lane }): Arc => ({ tail: rank[tail]!, head: rank[head]!, lane }))
    .sort((a, b) => a.tail - b.tail || a.head - b.head || a.lane - b.lane);
  const kept = Int32Array.from(map.segments.keys()).filter((i) => segmentNumber.of[i]! >= 0);
  const segments = Array.from(kept, (i) => map.segments[i]!);
  return {
    graph: flat(segments, ranked, nodeNumber.count),
    stored: stackUp(elimination),
    kept,
    leftOut: map.segments.length - segments.length,
  };
}

interface Arc {
  readonly tail: number;
  readonly head: number;
  readonly lane: number;
}

interface Joined {
  readonly nodes: number;
  readonly arcs: readonly Arc[];
}

/** A lane from whose end some turn is banned leads to a node of its own, with the turns that are left. */
function withTurns({ junctions, segments, bannedTurns }: SegmentsAndTurns): Joined {
  const leaving: number[][] = Array.from({ length: junctions }, () => []);
  const ownNode = new Map<number, number>();
  let nodes = junctions;
  const junctionAfter = (lane: number): number =>
    lane % 2 === 0 ? segments[lane >> 1]!.to : segments[lane >> 1]!.from;
  segments.forEach(({ from, to, alongMs, againstMs }, segment) => {
    if (alongMs > 0) leaving[from]!.push(segment * 2);
    if (againstMs > 0) leaving[to]!.push(segment * 2 + 1);
    for (const lane of [segment * 2, segment * 2 + 1])
      if ((bannedTurns.get(lane)?.size ?? 0) > 0) ownNode.set(lane, nodes++);
  });
  const headOf = (lane: number): number => ownNode.get(lane) ?? junctionAfter(lane);
  const arcs: Arc[] = [];
  leaving.forEach((lanes, tail) => {
    for (const lane of lanes) arcs.push({ tail, head: headOf(lane), lane });
  });
  for (const [lane, tail] of ownNode) {
    const banned = bannedTurns.get(lane)!;
    for (const next of leaving[junctionAfter(lane)]!)
      if (!banned.has(next)) arcs.push({ tail, head: headOf(next), lane: next });
  }
  return { nodes, arcs };
}

function outward({ nodes, arcs }: Joined): [Int32Array, Int32Array] {
  const first = new Int32Array(nodes + 1);
  for (const { tail } of arcs) first[tail + 1]!++;
  for (let v = 0; v < nodes; v++) first[v + 1]! += first[v]!;
  const next = first.slice(0, nodes);
  const to = new Int32Array(arcs.length);
  for (const { tail, head } of arcs) to[next[tail]!++] = head;
  return [first, to];
}

function neighbours(count: number, arcs: readonly Arc[]): Neighbours {
  const both = arcs.flatMap(({ tail, head, lane }) => [
    { tail, head, lane },
    { tail: head, head: tail, lane },
  ]);
  const [first, to] = outward({ nodes: count, arcs: both });
  return { first, to };
}

/** New numbers without gaps for those that are used; -1 for the others. */
function numbered(
  most: number,
  used: readonly number[],
): { readonly of: Int32Array; readonly count: number } {
  const of = new Int32Array(most).fill(-1);
  for (const one of used) of[one] = 0;
  let count = 0;
  for (let i = 0; i < most; i++) if (of[i] === 0) of[i] = count++;
  return { of, count };
}

function flat(segments: readonly Segment[], arcs: readonly Arc[], nodeCount: number): RoadGraph {
  const lanes = segments.length * 2;
  const laneHead = new Int32Array(lanes).fill(-1);
  for (const { head, lane } of arcs) laneHead[lane] = head;
  const laneTailFirst = new Int32Array(lanes + 1);
  for (const { lane } of arcs) laneTailFirst[lane + 1]!++;
  for (let lane = 0; lane < lanes; lane++) laneTailFirst[lane + 1]! += laneTailFirst[lane]!;
  const next = laneTailFirst.slice(0, lanes);
  const laneTail = new Int32Array(arcs.length);
  for (const { tail, lane } of arcs) laneTail[next[lane]!++] = tail;
  const lineFirst = new Int32Array(segments.length + 1);
  segments.forEach(({ lons }, i) => (lineFirst[i + 1] = lineFirst[i]! + lons.length));
  const lineLon = new Int32Array(lineFirst.at(-1)!);
  const lineLat = new Int32Array(lineFirst.at(-1)!);
  segments.forEach(({ lons, lats }, i) => {
    lineLon.set(lons, lineFirst[i]);
    lineLat.set(lats, lineFirst[i]);
  });
  return {
    nodeCount,
    segmentCount: segments.length,
    arcTail: Int32Array.from(arcs, ({ tail }) => tail),
    arcHead: Int32Array.from(arcs, ({ head }) => head),
    arcLane: Int32Array.from(arcs, ({ lane }) => lane),
    laneMs: Int32Array.from({ length: lanes }, (_, lane) =>
      lane % 2 === 0 ? segments[lane >> 1]!.alongMs : segments[lane >> 1]!.againstMs,
    ),
    laneHead,
    laneTailFirst,
    laneTail,
    segmentDm: Int32Array.from(segments, ({ dm }) => dm),
    segmentClass: Uint8Array.from(segments, ({ roadClass }) => roadClass),
    segmentFlags: Uint8Array.from(segments, ({ flags }) => flags),
    segmentName: Int32Array.from(segments, ({ name }) => name),
    lineFirst,
    lineLon,
    lineLat,
  };
}
