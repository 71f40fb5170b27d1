import type { StreetGraph } from './junctions';
import { CheapestFirst } from './least-cost';
import { lengthOf } from './plane';

export interface Arc {
  readonly to: number;
  readonly stretch: number;
  readonly metres: number;
}

/** Where one can go from each junction; one-way streets bind cars, not cables. */
export function arcsOf({ nodes, stretches }: StreetGraph): Arc[][] {
  const arcs: Arc[][] = nodes.map(() => []);
  stretches.forEach(({ from, to, points }, stretch) => {
    const metres = lengthOf(points);
    arcs[from]!.push({ to, stretch, metres });
    arcs[to]!.push({ to: from, stretch, metres });
  });
  return arcs;
}

export interface Reached {
  /** Metres along the streets to the nearest source, its head start included; Infinity where none leads. */
  readonly metres: Float64Array;
  /** Number of that source; -1 where none leads. */
  readonly source: Int32Array;
  /** The stretch by which each junction is reached; -1 at a source. */
  readonly by: Int32Array;
}

/**
 * The nearest of several sources to every junction, by road.
 *
 * @param isInside keeps the ways within a part of the network
 */
export function nearestByRoad(
  arcs: readonly (readonly Arc[])[],
  sources: readonly { readonly node: number; readonly start: number }[],
  isInside: (node: number) => boolean = () => true,
): Reached {
  const metres = new Float64Array(arcs.length).fill(Infinity);
  const source = new Int32Array(arcs.length).fill(-1);
  const by = new Int32Array(arcs.length).fill(-1);
  const open = new CheapestFirst();
  sources.forEach(({ node, start }, k) => {
    if (start >= metres[node]!) return;
    metres[node] = start;
    source[node] = k;
    open.push(start, node);
  });
  for (let top = open.pop(); top; top = open.pop()) {
    if (top.cost > metres[top.item]!) continue;
    for (const { to, stretch, metres: length } of arcs[top.item]!) {
      const cost = top.cost + length;
      if (cost >= metres[to]! || !isInside(to)) continue;
      metres[to] = cost;
      source[to] = source[top.item]!;
      by[to] = stretch;
      open.push(cost, to);
    }
  }
  return { metres, source, by };
}
