import type { OsmNode, OsmWay } from '../../server/region/osm-model';
import type { ReadOsm } from './region-files';

export type Spot = readonly [x: number, y: number];

/** Streets that a car may use to reach a door; service ways are yards and car parks. */
const STREETS = new Set(
  ['motorway', 'trunk', 'primary', 'secondary', 'tertiary'].flatMap((name) => [
    name,
    `${name}_link`,
  ]),
);
for (const name of ['unclassified', 'residential', 'living_street']) STREETS.add(name);

export const isStreet = ({ tags }: OsmWay): boolean =>
  STREETS.has(tags['highway'] ?? '') && tags['area'] !== 'yes';

export const gap = (a: Spot, b: Spot): number => Math.hypot(a[0] - b[0], a[1] - b[1]);

/** A stretch of street from one junction (or dead end) to the next, in metres. */
export interface Block {
  readonly from: number;
  readonly to: number;
  readonly metres: number;
  /** Whether it may be driven from `from` to `to`, and the other way. */
  readonly forward: boolean;
  readonly backward: boolean;
}

export interface RoadGraph {
  /** Places of junctions and dead ends, in metres on a plane. */
  readonly junctions: ReadonlyMap<number, Spot>;
  readonly blocks: readonly Block[];
  readonly shortestSegment: number;
}

/** Metres on a plane about the middle of a region, by the radii of the WGS84 ellipsoid there. */
export function planeOf(nodes: Iterable<OsmNode>): (node: { lon: number; lat: number }) => Spot {
  let [south, north] = [90, -90];
  for (const { lat } of nodes) {
    south = Math.min(south, lat);
    north = Math.max(north, lat);
  }
  const phi = (((south + north) / 2) * Math.PI) / 180;
  const perLat = 111_132.954 - 559.822 * Math.cos(2 * phi) + 1.175 * Math.cos(4 * phi);
  const perLon = 111_412.84 * Math.cos(phi) - 93.5 * Math.cos(3 * phi);
  return ({ lon, lat }) => [lon * perLon, lat * perLat];
}

/** Streets as junctions and the blocks between them; bends are no junctions. The largest connected part. */
export function roadGraph(osm: ReadOsm): RoadGraph {
  const plane = planeOf(osm.nodes.values());
  const at = new Map<number, Spot>();
  const links = new Map<number, { to: number; forward: boolean; backward: boolean }[]>();
  let shortestSegment = Infinity;
  const spotOf = (ref: number): Spot | null => {
    const known = at.get(ref);
    if (known) return known;
    const node = osm.nodes.get(ref);
    if (!node) return null;
    const spot = plane(node);
    at.set(ref, spot);
    return spot;
  };
  const join = (from: number, to: number, forward: boolean, backward: boolean): void => {
    const own = links.get(from) ?? [];
    own.push({ to, forward, backward });
    links.set(from, own);
  };
  for (const way of osm.ways) {
    if (!isStreet(way)) continue;
    const oneway = way.tags['oneway'] ?? (way.tags['junction'] === 'roundabout' ? 'yes' : 'no');
    const forward = oneway !== '-1';
    const backward = oneway === '-1' || !['yes', '1', 'true'].includes(oneway);
    for (let i = 1; i < way.refs.length; i++) {
      const [a, b] = [way.refs[i - 1]!, way.refs[i]!];
      const [p, q] = [spotOf(a), spotOf(b)];
      if (!p || !q || a === b) continue;
      shortestSegment = Math.min(shortestSegment, gap(p, q));
      join(a, b, forward, backward);
      join(b, a, backward, forward);
    }
  }
  const inside = largestPart(links);
  return { ...collapsed(links, inside, at), shortestSegment };
}

type Links = ReadonlyMap<
  number,
  readonly { readonly to: number; readonly forward: boolean; readonly backward: boolean }[]
>;

function largestPart(links: Links): Set<number> {
  const seen = new Set<number>();
  let largest = new Set<number>();
  for (const start of links.keys()) {
    if (seen.has(start)) continue;
    const part = new Set([start]);
    for (const node of part) for (const { to } of links.get(node) ?? []) part.add(to);
    for (const node of part) seen.add(node);
    if (part.size > largest.size) largest = part;
  }
  return largest;
}

function collapsed(
  links: Links,
  inside: ReadonlySet<number>,
  at: ReadonlyMap<number, Spot>,
): Omit<RoadGraph, 'shortestSegment'> {
  const isJunction = (node: number): boolean => links.get(node)!.length !== 2;
  const junctions = new Map<number, Spot>();
  const blocks: Block[] = [];
  for (const start of inside) {
    if (!isJunction(start)) continue;
    junctions.set(start, at.get(start)!);
    for (const [number, first] of links.get(start)!.entries()) {
      let [before, node] = [start, first.to];
      let metres = gap(at.get(start)!, at.get(node)!);
      let { forward, backward } = first;
      while (!isJunction(node)) {
        const [one, two] = links.get(node)!;
        // Two links to one neighbour: a bend that turns back, which is followed onward.
        const next = one!.to === before ? two! : one!;
        metres += gap(at.get(node)!, at.get(next.to)!);
        forward &&= next.forward;
        backward &&= next.backward;
        [before, node] = [node, next.to];
      }
      // Each block is met from both ends; a loop back to its own start is met twice there.
      if (start < node || (start === node && number % 2 === 0))
        blocks.push({ from: start, to: node, metres, forward, backward });
    }
  }
  return { junctions, blocks };
}
