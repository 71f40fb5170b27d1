/**
 * Roads as flat arrays, so that they fit into one file and threads can share them.
 *
 * A **segment** is a stretch of road between two junctions with its line and its length. Its two
 * directions are its **lanes**: 2 × segment along the line, 2 × segment + 1 against it. A **node** is a
 * junction; one from which not everybody may go on everywhere is there several times, once for each state
 * that a drive can be in (`drive-states.ts`), so an **arc** says which node a lane leads from and to, and
 * one lane may have several arcs.
 * Nodes are numbered by their rank in the hierarchy, the lowest first.
 */
export interface RoadGraph {
  readonly nodeCount: number;
  readonly segmentCount: number;

  readonly arcTail: Int32Array;
  readonly arcHead: Int32Array;
  readonly arcLane: Int32Array;

  /** Milliseconds from end to end of a lane as usual; meaningless for a lane that may not be driven. */
  readonly laneMs: Int32Array;
  /** The node at the end of a lane for a drive that began on it; -1 for a lane that may not be driven. */
  readonly laneHead: Int32Array;
  /** The nodes from which lane l may be entered: `laneTail[laneTailFirst[l]] …`. */
  readonly laneTailFirst: Int32Array;
  readonly laneTail: Int32Array;

  readonly segmentDm: Int32Array;
  /** Index into `ROAD_CLASSES`. */
  readonly segmentClass: Uint8Array;
  /** Sum of `SEGMENT_FLAGS`. */
  readonly segmentFlags: Uint8Array;
  /** Index of its name in the region's list of road names; 0 is no name. */
  readonly segmentName: Int32Array;
  /** The line of segment s: points `lineFirst[s]` to `lineFirst[s + 1]`, in 1e-7 degrees. */
  readonly lineFirst: Int32Array;
  readonly lineLon: Int32Array;
  readonly lineLat: Int32Array;
}

/** `destination`: open only to those who begin or end their drive there. */
export const SEGMENT_FLAGS = { bridge: 1, ford: 2, destination: 4 } as const;

/** No way, in milliseconds or decimetres: two of them still fit into 31 bits. */
export const NO_WAY = 0x3fff_ffff;

export const segmentOf = (lane: number): number => lane >> 1;
export const isAlong = (lane: number): boolean => (lane & 1) === 0;
