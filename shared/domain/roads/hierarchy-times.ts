import { upArcBetween, type Hierarchy } from './hierarchy';
import { NO_WAY, segmentOf, type RoadGraph } from './road-graph';

/** What it takes to go along the arcs of a hierarchy, up and down each. */
export interface HierarchyTimes {
  readonly upMs: Int32Array;
  readonly downMs: Int32Array;
  /** Decimetres of the quickest way that the milliseconds are of. */
  readonly upDm: Int32Array;
  readonly downDm: Int32Array;
  /**
   * What the arc stands for: a road's arc a as -2 - a, or the up-arc into its tail from the lower node
   * that the quickest way leads over; -1 for an arc that no way leads along.
   */
  readonly upVia: Int32Array;
  readonly downVia: Int32Array;
}

export function emptyTimes(
  arcs: number,
  make: (length: number) => Int32Array = (length) => new Int32Array(length),
): HierarchyTimes {
  return {
    upMs: make(arcs),
    downMs: make(arcs),
    upDm: make(arcs),
    downDm: make(arcs),
    upVia: make(arcs),
    downVia: make(arcs),
  };
}

/**
 * Works the times of the roads into the hierarchy, from the lowest node up: every arc gets the quickest
 * way over what lies below it.
 *
 * @param laneMs milliseconds of each lane; `NO_WAY` for one that nobody passes
 * @param times is filled
 */
export function workIn(
  h: Hierarchy,
  graph: RoadGraph,
  laneMs: Int32Array,
  times: HierarchyTimes,
): void {
  putRoads(h, graph, laneMs, times);
  const { nodeCount, upFirst, upHead, upTail, downFirst, downArc } = h;
  const { upMs, downMs, upDm, downDm, upVia, downVia } = times;
  const arcTo = new Int32Array(nodeCount);
  for (let x = 0; x < nodeCount; x++) {
    for (let arc = upFirst[x]!; arc < upFirst[x + 1]!; arc++) arcTo[upHead[arc]!] = arc;
    for (let at = downFirst[x]!; at < downFirst[x + 1]!; at++) {
      // From x down to v and up to y, and the other way round. v's arcs above this one end above x.
      const j = downArc[at]!;
      const toV = downMs[j]!;
      const fromV = upMs[j]!;
      if (toV >= NO_WAY && fromV >= NO_WAY) continue;
      const end = upFirst[upTail[j]! + 1]!;
      for (let i = j + 1; i < end; i++) {
        const k = arcTo[upHead[i]!]!;
        const up = toV + upMs[i]!;
        if (up < upMs[k]!) {
          upMs[k] = up;
          upDm[k] = downDm[j]! + upDm[i]!;
          upVia[k] = j;
        }
        const down = downMs[i]! + fromV;
        if (down < downMs[k]!) {
          downMs[k] = down;
          downDm[k] = downDm[i]! + upDm[j]!;
          downVia[k] = j;
        }
      }
    }
  }
}

function putRoads(
  h: Hierarchy,
  graph: RoadGraph,
  laneMs: Int32Array,
  { upMs, downMs, upDm, downDm, upVia, downVia }: HierarchyTimes,
): void {
  upMs.fill(NO_WAY);
  downMs.fill(NO_WAY);
  upDm.fill(NO_WAY);
  downDm.fill(NO_WAY);
  upVia.fill(-1);
  downVia.fill(-1);
  const { arcTail, arcHead, arcLane, segmentDm } = graph;
  for (let arc = 0; arc < arcTail.length; arc++) {
    const tail = arcTail[arc]!;
    const head = arcHead[arc]!;
    const lane = arcLane[arc]!;
    const ms = laneMs[lane]!;
    if (tail === head || ms >= NO_WAY) continue;
    const k = tail < head ? upArcBetween(h, tail, head) : upArcBetween(h, head, tail);
    const dm = segmentDm[segmentOf(lane)]!;
    if (tail < head && ms < upMs[k]!) {
      upMs[k] = ms;
      upDm[k] = dm;
      upVia[k] = -2 - arc;
    } else if (tail > head && ms < downMs[k]!) {
      downMs[k] = ms;
      downDm[k] = dm;
      downVia[k] = -2 - arc;
    }
  }
}
