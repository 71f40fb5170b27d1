import type { Hierarchy } from './hierarchy';
import type { HierarchyTimes } from './hierarchy-times';
import { NO_WAY } from './road-graph';

/** The arcs that a search has to look at, by the node they begin at below; they all lead up. */
export interface SearchArcs {
  readonly first: Int32Array;
  readonly head: Int32Array;
  readonly ms: Int32Array;
  readonly dm: Int32Array;
  /** The up-arc of the hierarchy that it is. */
  readonly arc: Int32Array;
}

export interface Searchable {
  /** Up from where a drive begins. */
  readonly up: SearchArcs;
  /** Up from where a drive ends, so they are driven downwards. */
  readonly down: SearchArcs;
}

export type MakeArray = (length: number) => Int32Array;

/**
 * Leaves out the arcs that are longer than another way over higher nodes: most of those between nodes
 * near the top, where everybody is joined with everybody ("perfect customization" in the paper that
 * `Hierarchy` names). Equal ones stay.
 */
export function searchArcs(
  h: Hierarchy,
  times: HierarchyTimes,
  make: MakeArray = (length) => new Int32Array(length),
): Searchable {
  const up = times.upMs.slice();
  const down = times.downMs.slice();
  const { upFirst, upHead } = h;
  for (let v = h.nodeCount - 1; v >= 0; v--) {
    const end = upFirst[v + 1]!;
    for (let i = upFirst[v]!; i < end; i++) {
      // All that v meets above x, x meets as well.
      let between = upFirst[upHead[i]!]!;
      for (let k = i + 1; k < end; k++) {
        const y = upHead[k]!;
        while (upHead[between]! < y) between++;
        const toY = up[between]!;
        const toX = down[between]!;
        if (times.upMs[k]! + toX < up[i]!) up[i] = times.upMs[k]! + toX;
        if (times.downMs[k]! + toY < down[i]!) down[i] = times.downMs[k]! + toY;
        if (times.upMs[i]! + toY < up[k]!) up[k] = times.upMs[i]! + toY;
        if (times.downMs[i]! + toX < down[k]!) down[k] = times.downMs[i]! + toX;
      }
    }
  }
  return {
    up: gathered(h, times.upMs, times.upDm, up, make),
    down: gathered(h, times.downMs, times.downDm, down, make),
  };
}

function gathered(
  { nodeCount, upFirst, upHead }: Hierarchy,
  arcMs: Int32Array,
  arcDm: Int32Array,
  quickest: Int32Array,
  make: MakeArray,
): SearchArcs {
  const isNeeded = (arc: number): boolean => arcMs[arc]! < NO_WAY && arcMs[arc] === quickest[arc];
  let count = 0;
  for (let arc = 0; arc < arcMs.length; arc++) if (isNeeded(arc)) count++;
  const found: SearchArcs = {
    first: make(nodeCount + 1),
    head: make(count),
    ms: make(count),
    dm: make(count),
    arc: make(count),
  };
  let next = 0;
  for (let v = 0; v < nodeCount; v++) {
    for (let arc = upFirst[v]!; arc < upFirst[v + 1]!; arc++) {
      if (!isNeeded(arc)) continue;
      found.head[next] = upHead[arc]!;
      found.ms[next] = arcMs[arc]!;
      found.dm[next] = arcDm[arc]!;
      found.arc[next] = arc;
      next++;
    }
    found.first[v + 1] = next;
  }
  return found;
}
