import Flatbush from 'flatbush';
import type { HouseAddress } from './addresses';
import { chanceOf, type Chance } from './chance';
import type { StreetGraph } from './junctions';
import { distance, type Point } from './plane';
import { arcsOf, nearestByRoad, type Arc, type Reached } from './road-distances';
import { StreetSpace } from './street-line';
import type { Town } from './towns';

export const FEEDER_COUNT = 60;
/** Rounds in which the feeders of a substation even out their houses. */
const ROUNDS = 14;
/** How many metres a feeder gives way for each house too many, as a share of its due. */
const GIVES_WAY = 320;

export interface Substation {
  /** Invented, as its feeders are called after it. */
  readonly name: string;
  readonly at: Point;
  readonly node: number;
}

/** A feeder: the junctions that it serves and the way that its main line takes. */
export interface Circuit {
  readonly name: string;
  readonly ref: string;
  readonly substation: number;
  /** The junction in the middle of its houses. */
  readonly heart: number;
  /** Stretches of street, in order, piece by piece; each a list of junctions and the stretches between. */
  readonly trunk: readonly (readonly Step[])[];
}

export interface Step {
  readonly node: number;
  /** The stretch by which the node is reached from the one before; -1 at the first. */
  readonly by: number;
}

export interface Circuits {
  readonly substations: readonly Substation[];
  readonly feeders: readonly Circuit[];
  /** Number of the feeder of each junction. */
  readonly feederOf: Int32Array;
}

/** Where substations stand: by which town, and in which direction from its middle. */
const SITES: readonly { readonly name: string; readonly town: number; readonly to: Point }[] = [
  { name: 'Heron', town: 0, to: [-0.75, -0.1] },
  { name: 'Osprey', town: 0, to: [0.05, 0.6] },
  { name: 'Kestrel', town: 0, to: [0.2, -0.6] },
  { name: 'Tamarack', town: 2, to: [0.5, -0.7] },
  { name: 'Granite', town: 4, to: [-0.6, -0.5] },
  { name: 'Plover', town: 7, to: [-0.6, 0.5] },
  { name: 'Capstan', town: 1, to: [0.3, 0.7] },
  { name: 'Strand', town: 14, to: [0, -0.6] },
];

/** Lays out the county's power: substations, and sixty feeders of about as many houses each. */
export function layOutCircuits(
  seed: number,
  towns: readonly Town[],
  graph: StreetGraph,
  addresses: readonly HouseAddress[],
): Circuits {
  const arcs = arcsOf(graph);
  const houses = housesAt(graph, addresses);
  const substations = placeSubstations(towns, graph);
  const territory = nearestByRoad(
    arcs,
    substations.map(({ node }) => ({ node, start: 0 })),
  );
  const load = substations.map((_, k) =>
    houses.reduce((sum, count, node) => sum + (territory.source[node] === k ? count : 0), 0),
  );
  const counts = shared(FEEDER_COUNT, load);
  const feederOf = new Int32Array(graph.nodes.length).fill(-1);
  const feeders: Circuit[] = [];
  substations.forEach(({ name, node }, k) => {
    const own = graph.nodes.flatMap((_, i) => (territory.source[i] === k ? [i] : []));
    const first = feeders.length;
    const parts = evenParts(
      graph,
      arcs,
      houses,
      own,
      node,
      counts[k]!,
      chanceOf(seed, 'feeders', k),
    );
    for (const i of own) feederOf[i] = first + parts.source[i]!;
    parts.hearts.forEach((heart, number) => {
      feeders.push({
        name: `${name} ${number + 1}`,
        ref: `${name.slice(0, 3).toUpperCase()}-${number + 1}`,
        substation: k,
        heart,
        trunk: trunkOf(graph, arcs, territory, heart, (i) => feederOf[i] === first + number),
      });
    });
  });
  return { substations, feeders, feederOf };
}

/** How many houses are nearest to each junction. */
function housesAt({ nodes }: StreetGraph, addresses: readonly HouseAddress[]): number[] {
  const index = new Flatbush(nodes.length);
  for (const [x, y] of nodes) index.add(x, y);
  index.finish();
  const houses = new Array<number>(nodes.length).fill(0);
  for (const { at } of addresses) {
    const node = index.neighbors(at[0], at[1], 1)[0];
    if (node !== undefined) houses[node]!++;
  }
  return houses;
}

function placeSubstations(towns: readonly Town[], graph: StreetGraph): Substation[] {
  const space = new StreetSpace();
  for (const { points } of graph.stretches) space.add(points, '');
  return SITES.map(({ name, town, to }) => {
    const { at, radius } = towns[town]!;
    const wanted: Point = [at[0] + to[0] * radius, at[1] + to[1] * radius];
    let node = 0;
    graph.nodes.forEach((p, i) => {
      if (distance(p, wanted) < distance(graph.nodes[node]!, wanted)) node = i;
    });
    const [x, y] = graph.nodes[node]!;
    const plots: Point[] = [-1, 1].flatMap((i) =>
      [-1, 1].map((j): Point => [x + i * 34, y + j * 34]),
    );
    const room = (p: Point): number => space.nearest(p, 60)?.metres ?? 60;
    return { name, node, at: plots.reduce((best, p) => (room(p) > room(best) ? p : best)) };
  });
}

/** Shares out a count by weight (largest remainders), two to everyone at least. */
function shared(count: number, weights: readonly number[]): number[] {
  const total = weights.reduce((sum, weight) => sum + weight, 0);
  const due = weights.map((weight) => (weight / total) * count);
  const shares = due.map((share) => Math.max(2, Math.floor(share)));
  const left = (): number => count - shares.reduce((sum, share) => sum + share, 0);
  const lack = (k: number): number => due[k]! - shares[k]!;
  const order = weights.map((_, k) => k);
  while (left() > 0) {
    const k = order.reduce((best, other) => (lack(other) > lack(best) ? other : best));
    shares[k]!++;
  }
  while (left() < 0) {
    const k = order.reduce((best, other) =>
      shares[other]! > 2 && lack(other) < lack(best) ? other : best,
    );
    shares[k]!--;
  }
  return shares;
}

/**
 * Cuts a territory into parts that are connected by road and have about as many houses each: each
 * junction belongs to the nearest heart, hearts move to the middle of their houses, and those with
 * too many houses stand back.
 */
function evenParts(
  { nodes }: StreetGraph,
  arcs: readonly (readonly Arc[])[],
  houses: readonly number[],
  own: readonly number[],
  head: number,
  count: number,
  chance: Chance,
): { source: Int32Array; hearts: number[] } {
  const isOwn = new Set(own);
  const inside = (node: number): boolean => isOwn.has(node);
  const spread = (hearts: readonly number[], starts: readonly number[]): Reached =>
    nearestByRoad(
      arcs,
      hearts.map((node, k) => ({ node, start: starts[k]! })),
      inside,
    );
  // The first hearts are drawn by houses and distance, so that towns get many and the country some
  // (k-means++; Arthur and Vassilvitskii, 2007).
  let hearts = [head];
  while (hearts.length < count) {
    const { metres } = spread(
      hearts,
      hearts.map(() => 0),
    );
    const weight = (node: number): number => houses[node]! * metres[node]!;
    let left = chance.next() * own.reduce((sum, node) => sum + weight(node), 0);
    hearts.push(own.find((node) => (left -= weight(node)) <= 0) ?? head);
  }
  const due = own.reduce((sum, node) => sum + houses[node]!, 0) / count;
  let starts = hearts.map(() => 0);
  let reached = spread(hearts, starts);
  for (let round = 0; round < ROUNDS; round++) {
    const sums = hearts.map(() => ({ houses: 0, x: 0, y: 0 }));
    for (const node of own) {
      const sum = sums[reached.source[node]!]!;
      const weight = houses[node]! + 0.05;
      sum.houses += weight;
      sum.x += weight * nodes[node]![0];
      sum.y += weight * nodes[node]![1];
    }
    const middles = sums.map((sum): Point => [sum.x / sum.houses, sum.y / sum.houses]);
    const nearest = hearts.map((heart) => ({ node: heart, metres: Infinity }));
    for (const node of own) {
      const k = reached.source[node]!;
      const metres = distance(nodes[node]!, middles[k]!);
      if (metres < nearest[k]!.metres) nearest[k] = { node, metres };
    }
    hearts = nearest.map(({ node }) => node);
    starts = starts.map((start, k) => {
      const excess = Math.max(-1, Math.min(1, (sums[k]!.houses - due) / due));
      return Math.max(0, start + excess * GIVES_WAY);
    });
    const next = spread(hearts, starts);
    // A heart that would be swallowed ends the evening out; what was reached before stands.
    if (hearts.some((heart, k) => next.source[heart] !== k)) {
      starts = starts.map((start) => start * 0.5);
      const milder = spread(hearts, starts);
      if (hearts.some((heart, k) => milder.source[heart] !== k)) {
        starts = starts.map(() => 0);
        reached = spread(hearts, starts);
      } else reached = milder;
    } else reached = next;
  }
  return { source: reached.source, hearts };
}

/** From the substation to the heart, and on from there to the two ends that lie farthest. */
function trunkOf(
  graph: StreetGraph,
  arcs: readonly (readonly Arc[])[],
  territory: Reached,
  heart: number,
  isOwn: (node: number) => boolean,
): Step[][] {
  const back = ({ by }: Reached, end: number): Step[] => {
    const steps: Step[] = [];
    for (let node = end; ;) {
      const stretch = by[node]!;
      steps.push({ node, by: stretch });
      if (stretch < 0) return steps.reverse();
      const { from, to } = graph.stretches[stretch]!;
      node = from === node ? to : from;
    }
  };
  const own = nearestByRoad(arcs, [{ node: heart, start: 0 }], isOwn);
  const pieces = [back(territory, heart)];
  const met = new Set(pieces[0]!.map(({ node }) => node));
  for (let branch = 0; branch < 2; branch++) {
    let far = heart;
    for (let node = 0; node < own.metres.length; node++) {
      const metres = own.metres[node]!;
      if (metres < Infinity && metres > own.metres[far]! && !met.has(node)) far = node;
    }
    const piece = back(own, far);
    const fresh = piece.findIndex(({ node }) => !met.has(node));
    if (fresh < 1) continue;
    const added = piece.slice(fresh - 1).map((step, i) => (i === 0 ? { ...step, by: -1 } : step));
    for (const { node } of added) met.add(node);
    pieces.push(added);
    // The next branch should leave in another direction than along this one.
    for (const [node, metres] of own.metres.entries())
      if (metres < Infinity && distance(graph.nodes[node]!, graph.nodes[far]!) < 500) met.add(node);
  }
  return pieces;
}
