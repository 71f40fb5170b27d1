import type { RoadFactors } from './conditions';
import { ROAD_CLASSES } from './road-class';
import { NO_WAY, SEGMENT_FLAGS, type RoadGraph } from './road-graph';
import type { StormCover } from './storm-cover';

/** How long each lane takes under some conditions. */
export interface LaneTimes {
  /** Milliseconds from end to end; `NO_WAY` where nobody passes. */
  readonly laneMs: Int32Array;
  /** The same without closures, for those who only go to a door before one. */
  readonly openMs: Int32Array;
  /** The stretch of a segment that nobody passes, as shares of its length. */
  readonly cuts: ReadonlyMap<number, readonly [from: number, to: number]>;
}

/** Times of all lanes under factors and storm roads. Rounded to milliseconds, at least one. */
export function laneTimes(graph: RoadGraph, factors: RoadFactors, cover: StormCover): LaneTimes {
  const { timeOfDay, storm, byClass, ferriesRun = true, fordsPassable = true } = factors;
  const speeds = ROAD_CLASSES.map((roadClass) =>
    roadClass === 'ferry' ? 1 : checked(timeOfDay * storm * (byClass[roadClass] ?? 1)),
  );
  const ferry = ROAD_CLASSES.indexOf('ferry');
  const cuts = new Map(cover.cuts);
  const openMs = new Int32Array(graph.laneMs.length);
  const laneMs = new Int32Array(graph.laneMs.length);
  for (let segment = 0; segment < graph.segmentCount; segment++) {
    const roadClass = graph.segmentClass[segment]!;
    if (
      (!ferriesRun && roadClass === ferry) ||
      (!fordsPassable && (graph.segmentFlags[segment]! & SEGMENT_FLAGS.ford) !== 0)
    )
      cuts.set(segment, [0, 1]);
    const slower = (cover.slowness.get(segment) ?? 1) / speeds[roadClass]!;
    const isCut = cuts.has(segment);
    for (const lane of [segment * 2, segment * 2 + 1]) {
      const ms = Math.min(Math.max(1, Math.round(graph.laneMs[lane]! * slower)), LONGEST_MS);
      openMs[lane] = ms;
      laneMs[lane] = isCut ? NO_WAY : ms;
    }
  }
  return { laneMs, openMs, cuts };
}

/** A day: no stretch between two junctions takes longer, and sums stay within 31 bits. */
const LONGEST_MS = 86_400_000;

function checked(share: number): number {
  if (!(share > 0 && share < Infinity))
    throw new RangeError(`A share of ${share} of the usual speed is none.`);
  return share;
}
