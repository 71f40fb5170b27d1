import { parentOf, type Hierarchy } from './hierarchy';
import { NO_WAY } from './road-graph';
import type { RoadEnd } from './road-ends';
import type { SearchArcs } from './search-arcs';

/**
 * The way up from a point: every node above its ends, with the quickest time to reach it by going up
 * only. No queue is needed, since a node's arcs lead to its ancestors and those are visited in their
 * order. Made once and used again and again; what the last climb left is cleared by the next.
 */
export class Climb {
  readonly ms: Int32Array;
  readonly dm: Int32Array;
  /** The up-arc by which a node is reached best, or -2 - e for end e. */
  readonly by: Int32Array;
  /** The nodes of the last climb in ascending order: the first `count` of them. */
  readonly visited: Int32Array;
  count = 0;

  constructor(private readonly h: Hierarchy) {
    this.ms = new Int32Array(h.nodeCount).fill(NO_WAY);
    this.dm = new Int32Array(h.nodeCount).fill(NO_WAY);
    this.by = new Int32Array(h.nodeCount);
    this.visited = new Int32Array(h.nodeCount);
  }

  from(ends: readonly RoadEnd[], arcs: SearchArcs): void {
    const { h, ms, dm, by, visited } = this;
    for (let i = 0; i < this.count; i++) ms[visited[i]!] = NO_WAY;
    this.count = 0;
    ends.forEach((end, index) => {
      if (end.ms >= ms[end.node]!) return;
      ms[end.node] = end.ms;
      dm[end.node] = end.dm;
      by[end.node] = -2 - index;
    });
    const at = ends.map(({ node }) => node);
    for (;;) {
      const v = lowest(at);
      if (v < 0) return;
      visited[this.count++] = v;
      const here = ms[v]!;
      if (here < NO_WAY) {
        const end = arcs.first[v + 1]!;
        for (let i = arcs.first[v]!; i < end; i++) {
          const head = arcs.head[i]!;
          const reached = here + arcs.ms[i]!;
          if (reached < ms[head]!) {
            ms[head] = reached;
            dm[head] = dm[v]! + arcs.dm[i]!;
            by[head] = arcs.arc[i]!;
          }
        }
      }
      const parent = parentOf(h, v);
      for (let i = 0; i < at.length; i++) if (at[i] === v) at[i] = parent;
    }
  }
}

/** The least of the numbers that are not negative; -1 when there is none. */
function lowest(numbers: readonly number[]): number {
  let least = -1;
  for (const one of numbers) if (one >= 0 && (least < 0 || one < least)) least = one;
  return least;
}
