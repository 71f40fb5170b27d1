import { NO_WAY, segmentOf, type RoadGraph } from './road-graph';
import type { LaneTimes } from './lane-times';

/** A point on a road: how far along its segment, 0 to 1. */
export interface RoadPoint {
  readonly segment: number;
  readonly share: number;
}

/** A node that a drive from or to a point goes through, and what lies between the two. */
export interface RoadEnd {
  readonly node: number;
  readonly lane: number;
  readonly ms: number;
  readonly dm: number;
}

const lanesOf = ({ segment }: RoadPoint): readonly [number, number] => [
  segment * 2,
  segment * 2 + 1,
];

/** The share of the lane that lies behind the point, as its traffic sees it. */
const behind = (lane: number, { share }: RoadPoint): number => (lane % 2 === 0 ? share : 1 - share);

/** Whole milliseconds and decimetres from a lane's beginning to the point. */
function upTo(graph: RoadGraph, times: LaneTimes, lane: number, point: RoadPoint) {
  const share = behind(lane, point);
  return {
    ms: Math.round(times.openMs[lane]! * share),
    dm: Math.round(graph.segmentDm[segmentOf(lane)]! * share),
  };
}

/** Whether a stretch that nobody passes lies on the segment between two shares of it. */
function isCut(times: LaneTimes, segment: number, from: number, to: number): boolean {
  const cut = times.cuts.get(segment);
  return cut !== undefined && cut[0] <= to && cut[1] >= from;
}

/** Where a drive that begins at the point reaches its first junction. */
export function departures(graph: RoadGraph, times: LaneTimes, point: RoadPoint): RoadEnd[] {
  return lanesOf(point).flatMap((lane): RoadEnd[] => {
    const node = graph.laneHead[lane]!;
    const isAlong = lane % 2 === 0;
    if (node < 0) return [];
    if (isCut(times, point.segment, isAlong ? point.share : 0, isAlong ? 1 : point.share))
      return [];
    const { ms, dm } = upTo(graph, times, lane, point);
    return [
      {
        node,
        lane,
        ms: times.openMs[lane]! - ms,
        dm: graph.segmentDm[point.segment]! - dm,
      },
    ];
  });
}

/** Where a drive that ends at the point leaves its last junction. */
export function arrivals(graph: RoadGraph, times: LaneTimes, point: RoadPoint): RoadEnd[] {
  return lanesOf(point).flatMap((lane): RoadEnd[] => {
    const isAlong = lane % 2 === 0;
    if (isCut(times, point.segment, isAlong ? 0 : point.share, isAlong ? point.share : 1))
      return [];
    const { ms, dm } = upTo(graph, times, lane, point);
    const tails = graph.laneTail.subarray(graph.laneTailFirst[lane], graph.laneTailFirst[lane + 1]);
    return Array.from(tails, (node) => ({ node, lane, ms, dm }));
  });
}

/** The drive between two points of one segment without leaving it; `NO_WAY` when there is none. */
export function withinSegment(
  graph: RoadGraph,
  times: LaneTimes,
  from: RoadPoint,
  to: RoadPoint,
): { readonly ms: number; readonly dm: number } {
  if (from.segment !== to.segment) return NONE;
  if (from.share === to.share) return { ms: 0, dm: 0 };
  const lane = from.segment * 2 + (from.share < to.share ? 0 : 1);
  const [low, high] = from.share < to.share ? [from.share, to.share] : [to.share, from.share];
  if (graph.laneHead[lane]! < 0 || isCut(times, from.segment, low, high)) return NONE;
  const a = upTo(graph, times, lane, from);
  const b = upTo(graph, times, lane, to);
  return { ms: b.ms - a.ms, dm: b.dm - a.dm };
}

const NONE = { ms: NO_WAY, dm: NO_WAY } as const;
