import type { Climb } from './climb';
import { parentOf, type Hierarchy } from './hierarchy';
import { NO_WAY } from './road-graph';
import type { RoadEnd } from './road-ends';
import type { SearchArcs } from './search-arcs';

/** How many drives are swept down side by side: each arc is then read once for all of them. */
export const ABREAST = 4;

/**
 * All that lies above some points as a small graph, the highest node first, so that times spread down
 * through it in one pass.
 */
export class Sweep {
  private readonly nodes: Int32Array;
  private readonly first: Int32Array;
  /** Place of the arc's upper end, times `ABREAST`. */
  private readonly head: Int32Array;
  private readonly arcMs: Int32Array;
  private readonly arcDm: Int32Array;
  /** Times and lengths, place × `ABREAST` + which. */
  private readonly ms: Int32Array;
  private readonly dm: Int32Array;
  /** The points' ends one after the other: place in the small graph and what is left from there. */
  private readonly endFirst: Int32Array;
  private readonly endPlace: Int32Array;
  private readonly endMs: Int32Array;
  private readonly endDm: Int32Array;

  /** @param placeOf -1 for every node of the hierarchy; it is so again after `end` */
  constructor(
    h: Hierarchy,
    arcs: SearchArcs,
    points: readonly (readonly RoadEnd[])[],
    private readonly placeOf: Int32Array,
  ) {
    this.nodes = nodesAbove(h, points, placeOf);
    const { nodes } = this;
    let count = 0;
    for (const v of nodes) count += arcs.first[v + 1]! - arcs.first[v]!;
    this.first = new Int32Array(nodes.length + 1);
    this.head = new Int32Array(count);
    this.arcMs = new Int32Array(count);
    this.arcDm = new Int32Array(count);
    let next = 0;
    for (let place = 0; place < nodes.length; place++) {
      const v = nodes[place]!;
      for (let i = arcs.first[v]!; i < arcs.first[v + 1]!; i++) {
        this.head[next] = placeOf[arcs.head[i]!]! * ABREAST;
        this.arcMs[next] = arcs.ms[i]!;
        this.arcDm[next] = arcs.dm[i]!;
        next++;
      }
      this.first[place + 1] = next;
    }
    this.ms = new Int32Array(nodes.length * ABREAST);
    this.dm = new Int32Array(nodes.length * ABREAST);
    const ends = points.flat();
    this.endFirst = new Int32Array(points.length + 1);
    points.forEach((own, i) => (this.endFirst[i + 1] = this.endFirst[i]! + own.length));
    this.endPlace = Int32Array.from(ends, ({ node }) => placeOf[node]! * ABREAST);
    this.endMs = Int32Array.from(ends, (end) => end.ms);
    this.endDm = Int32Array.from(ends, (end) => end.dm);
  }

  clear(): void {
    this.ms.fill(NO_WAY);
  }

  /** Takes over what a climb has reached, as number `which` of those side by side. */
  take(climb: Climb, which: number): void {
    for (let i = 0; i < climb.count; i++) {
      const v = climb.visited[i]!;
      const place = this.placeOf[v]!;
      if (place < 0) continue;
      this.ms[place * ABREAST + which] = climb.ms[v]!;
      this.dm[place * ABREAST + which] = climb.dm[v]!;
    }
  }

  run(): void {
    const { first, head, arcMs, arcDm, ms, dm } = this;
    const places = first.length - 1;
    for (let place = 0, at = 0; place < places; place++, at += ABREAST) {
      let [best0, best1, best2, best3] = [ms[at]!, ms[at + 1]!, ms[at + 2]!, ms[at + 3]!];
      let [over0, over1, over2, over3] = [-1, -1, -1, -1];
      const end = first[place + 1]!;
      for (let arc = first[place]!; arc < end; arc++) {
        const from = head[arc]!;
        const more = arcMs[arc]!;
        const reached0 = ms[from]! + more;
        const reached1 = ms[from + 1]! + more;
        const reached2 = ms[from + 2]! + more;
        const reached3 = ms[from + 3]! + more;
        if (reached0 < best0) {
          best0 = reached0;
          over0 = arc;
        }
        if (reached1 < best1) {
          best1 = reached1;
          over1 = arc;
        }
        if (reached2 < best2) {
          best2 = reached2;
          over2 = arc;
        }
        if (reached3 < best3) {
          best3 = reached3;
          over3 = arc;
        }
      }
      if (over0 >= 0) {
        ms[at] = best0;
        dm[at] = dm[head[over0]!]! + arcDm[over0]!;
      }
      if (over1 >= 0) {
        ms[at + 1] = best1;
        dm[at + 1] = dm[head[over1]! + 1]! + arcDm[over1]!;
      }
      if (over2 >= 0) {
        ms[at + 2] = best2;
        dm[at + 2] = dm[head[over2]! + 2]! + arcDm[over2]!;
      }
      if (over3 >= 0) {
        ms[at + 3] = best3;
        dm[at + 3] = dm[head[over3]! + 3]! + arcDm[over3]!;
      }
    }
  }

  /** Writes the drives of number `which` with every point, from `at` on. */
  write(
    which: number,
    out: { readonly ms: Int32Array; readonly dm: Int32Array },
    at: number,
  ): void {
    const { endFirst, endPlace, endMs, endDm, ms, dm } = this;
    for (let point = 0; point + 1 < endFirst.length; point++) {
      let best = NO_WAY;
      let length = NO_WAY;
      for (let end = endFirst[point]!; end < endFirst[point + 1]!; end++) {
        const place = endPlace[end]! + which;
        const reached = ms[place]! + endMs[end]!;
        if (reached >= best) continue;
        best = reached;
        length = dm[place]! + endDm[end]!;
      }
      out.ms[at + point] = best;
      out.dm[at + point] = length;
    }
  }

  end(): void {
    for (const v of this.nodes) this.placeOf[v] = -1;
  }
}

/**
 * Spreads the times of a climb down to every node there is.
 *
 * @param all is filled, by node
 */
export function sweepAll(
  arcs: SearchArcs,
  climb: Climb,
  all: { readonly ms: Int32Array; readonly dm: Int32Array },
): void {
  const { ms, dm } = all;
  const { first, head, ms: arcMs, dm: arcDm } = arcs;
  for (let v = ms.length - 1; v >= 0; v--) {
    let best = climb.ms[v]!;
    let over = -1;
    const end = first[v + 1]!;
    for (let arc = first[v]!; arc < end; arc++) {
      const reached = ms[head[arc]!]! + arcMs[arc]!;
      if (reached >= best) continue;
      best = reached;
      over = arc;
    }
    ms[v] = best;
    dm[v] = over < 0 ? climb.dm[v]! : dm[head[over]!]! + arcDm[over]!;
  }
}

/** The quickest drive through one of the ends; `NO_WAY` when there is none. */
export function quickest(
  ends: readonly RoadEnd[],
  all: { readonly ms: Int32Array; readonly dm: Int32Array },
): readonly [ms: number, dm: number] {
  let best = NO_WAY;
  let length = NO_WAY;
  for (const end of ends) {
    const reached = all.ms[end.node]! + end.ms;
    if (reached >= best) continue;
    best = reached;
    length = all.dm[end.node]! + end.dm;
  }
  return [best, length];
}

function nodesAbove(
  h: Hierarchy,
  points: readonly (readonly RoadEnd[])[],
  placeOf: Int32Array,
): Int32Array {
  const found: number[] = [];
  for (const ends of points) {
    for (const { node } of ends) {
      for (let v = node; v >= 0 && placeOf[v]! < 0; v = parentOf(h, v)) {
        placeOf[v] = 0;
        found.push(v);
      }
    }
  }
  const nodes = Int32Array.from(found).sort().reverse();
  for (let place = 0; place < nodes.length; place++) placeOf[nodes[place]!] = place;
  return nodes;
}
