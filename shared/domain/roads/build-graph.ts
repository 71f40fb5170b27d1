import { driveStates, type StateArc } from './drive-states';
import { eliminate, type Neighbours } from './elimination-order';
import { stackUp, type StoredHierarchy } from './hierarchy';
import { type RoadGraph, SEGMENT_FLAGS } from './road-graph';
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
  readonly bannedPaths: readonly LanePath[];
}

/**
 * Lanes (2 × segment, + 1 against the line), two or more, that nobody may drive one after the other: a
 * banned turn, or one that is banned for those who come from some road before.
 */
export type LanePath = readonly number[];

export interface BuiltRoads {
  readonly graph: RoadGraph;
  readonly stored: StoredHierarchy;
  /** The numbers that the graph's segments had on the map; those that are missing were left out. */
  readonly kept: Int32Array;
  /** Segments that are not joined to the rest in both directions, and so were left out. */
  readonly leftOut: number;
  /** Whether drives may only begin or end on a lane, in the map's numbers. */
  readonly isForVisits: (lane: number) => boolean;
}

/**
 * Makes the graph of a region's roads: the largest part in which everybody can get everywhere and back,
 * its nodes with what may be driven from them, and the hierarchy over it.
 */
export function buildRoads(map: SegmentsAndTurns): BuiltRoads {
  const isThere = (lane: number): boolean => {
    const { alongMs, againstMs } = map.segments[lane >> 1]!;
    return (lane % 2 === 0 ? alongMs : againstMs) > 0;
  };
  const joined = joinedLanes(map, isThere);
  const isJoined = (lane: number): boolean => joined[lane] === 1;
  const isForVisits = visitLanes(map, isJoined);
  const states = driveStates(map, isJoined, isForVisits);
  const segmentNumber = numbered(
    map.segments.length,
    states.arcs.map(({ lane }) => lane >> 1),
  );
  const laneNumber = (lane: number): number => segmentNumber.of[lane >> 1]! * 2 + (lane & 1);
  const elimination = eliminate(neighbours(states.count, states.arcs));
  const rank = new Int32Array(states.count);
  elimination.order.forEach((state, at) => (rank[state] = at));
  const ranked = states.arcs
    .map(({ tail, head, lane }): StateArc => ({
      tail: rank[tail]!,
      head: rank[head]!,
      lane: laneNumber(lane),
    }))
    .sort((a, b) => a.tail - b.tail || a.head - b.head || a.lane - b.lane);
  const laneHead = new Int32Array(segmentNumber.count * 2).fill(-1);
  states.startOf.forEach((state, lane) => {
    if (state >= 0) laneHead[laneNumber(lane)] = rank[state]!;
  });
  const kept = Int32Array.from(map.segments.keys()).filter((i) => segmentNumber.of[i]! >= 0);
  const segments = Array.from(kept, (i) => map.segments[i]!);
  return {
    graph: flat(segments, ranked, laneHead, states.count),
    stored: stackUp(elimination),
    kept,
    leftOut: map.segments.length - segments.length,
    isForVisits,
  };
}

/** 1 for each lane of the largest part in which everybody gets from each to each, banned paths observed. */
function joinedLanes(map: SegmentsAndTurns, isDriven: (lane: number) => boolean): Uint8Array {
  const { count, arcs } = driveStates(map, isDriven, () => false);
  const inside = largestStrongPart(...outward(count, arcs));
  const joined = new Uint8Array(map.segments.length * 2);
  for (const { tail, head, lane } of arcs) if (inside[tail]! && inside[head]!) joined[lane] = 1;
  return joined;
}

/**
 * Which lanes are for visits only: those that are said to be, and what can be reached only through such
 * a one, or left only through it.
 */
function visitLanes(
  map: SegmentsAndTurns,
  isJoined: (lane: number) => boolean,
): (lane: number) => boolean {
  const isSaid = (lane: number): boolean =>
    (map.segments[lane >> 1]!.flags & SEGMENT_FLAGS.destination) !== 0;
  const isAnySaid = map.segments.some((_, segment) => isSaid(segment * 2));
  if (!isAnySaid) return () => false;
  const through = joinedLanes(map, (lane) => isJoined(lane) && !isSaid(lane));
  // Where there is no road for everybody, nothing is told apart.
  return through.includes(1) ? (lane) => through[lane] === 0 : () => false;
}

function outward(nodes: number, arcs: readonly StateArc[]): [Int32Array, Int32Array] {
  const first = new Int32Array(nodes + 1);
  for (const { tail } of arcs) first[tail + 1]!++;
  for (let v = 0; v < nodes; v++) first[v + 1]! += first[v]!;
  const next = first.slice(0, nodes);
  const to = new Int32Array(arcs.length);
  for (const { tail, head } of arcs) to[next[tail]!++] = head;
  return [first, to];
}

function neighbours(count: number, arcs: readonly StateArc[]): Neighbours {
  const both = arcs.flatMap(({ tail, head, lane }) => [
    { tail, head, lane },
    { tail: head, head: tail, lane },
  ]);
  const [first, to] = outward(count, both);
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

function flat(
  segments: readonly Segment[],
  arcs: readonly StateArc[],
  laneHead: Int32Array,
  nodeCount: number,
): RoadGraph {
  const lanes = segments.length * 2;
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
