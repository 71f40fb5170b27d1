import type { Elimination } from './elimination-order';

/**
 * The ways over nodes that were taken out earlier, as arcs from each node up to those above it. It
 * depends on how the roads join, and not on how fast they are, so a storm does not change it.
 *
 * A customizable contraction hierarchy: Dibbelt, Strasser & Wagner, "Customizable Contraction
 * Hierarchies", ACM Journal of Experimental Algorithmics 21 (2016).
 */
export interface Hierarchy {
  readonly nodeCount: number;
  /** Up-arcs of node v: `upFirst[v]` to `upFirst[v + 1]`; their heads ascend, the first is its parent. */
  readonly upFirst: Int32Array;
  readonly upHead: Int32Array;
  /** The node that an up-arc begins at. */
  readonly upTail: Int32Array;
  /** Up-arcs that end at node v, those from lower nodes first: `downArc[downFirst[v]] …`. */
  readonly downFirst: Int32Array;
  readonly downArc: Int32Array;
}

/** The part of a hierarchy that has to be stored; nodes are numbered by rank. */
export type StoredHierarchy = Pick<Hierarchy, 'upFirst' | 'upHead'>;

export function stackUp({ order, above }: Elimination): StoredHierarchy {
  const count = order.length;
  const rank = new Int32Array(count);
  order.forEach((node, at) => (rank[node] = at));
  const upFirst = new Int32Array(count + 1);
  for (let v = 0; v < count; v++) upFirst[v + 1] = upFirst[v]! + above[order[v]!]!.length;
  const upHead = new Int32Array(upFirst[count]!);
  for (let v = 0; v < count; v++)
    upHead.set(above[order[v]!]!.map((x) => rank[x]!).sort(), upFirst[v]);
  return { upFirst, upHead };
}

/** Adds what follows from the stored part. `make` decides where the arrays live. */
export function withWaysDown(
  { upFirst, upHead }: StoredHierarchy,
  make: (length: number) => Int32Array = (length) => new Int32Array(length),
): Hierarchy {
  const nodeCount = upFirst.length - 1;
  const upTail = make(upHead.length);
  const downFirst = make(nodeCount + 1);
  const downArc = make(upHead.length);
  for (let v = 0; v < nodeCount; v++) {
    for (let arc = upFirst[v]!; arc < upFirst[v + 1]!; arc++) {
      upTail[arc] = v;
      downFirst[upHead[arc]! + 1]!++;
    }
  }
  for (let v = 0; v < nodeCount; v++) downFirst[v + 1]! += downFirst[v]!;
  const next = downFirst.slice(0, nodeCount);
  for (let arc = 0; arc < upHead.length; arc++) downArc[next[upHead[arc]!]!++] = arc;
  return { nodeCount, upFirst, upHead, upTail, downFirst, downArc };
}

/** The next node up, or -1 at the top of a part. */
export const parentOf = ({ upFirst, upHead }: Hierarchy, v: number): number =>
  upFirst[v]! < upFirst[v + 1]! ? upHead[upFirst[v]!]! : -1;

/** The up-arc between two nodes, or -1. */
export function upArcBetween({ upFirst, upHead }: Hierarchy, lower: number, upper: number): number {
  let low = upFirst[lower]!;
  let high = upFirst[lower + 1]! - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    const found = upHead[middle]!;
    if (found === upper) return middle;
    if (found < upper) low = middle + 1;
    else high = middle - 1;
  }
  return -1;
}
