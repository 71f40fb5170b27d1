import type { Tags } from '../osm-model';
import { chanceOf } from './chance';
import type { StreetGraph, Stretch } from './junctions';
import { distance, lengthOf, type Point } from './plane';
import { isMutual } from './reach';
import type { StreetClass, StreetLine } from './street-line';
import { isOneWay } from './town-grid';
import type { Town } from './towns';

/** Way that traffic may take along a stretch: both, as the stretch runs, or against it. */
export type Flow = 0 | 1 | -1;

export interface TurnRule {
  readonly kind: 'no_left_turn';
  /** The stretch that one comes by, the junction, and the stretch that the rule speaks of. */
  readonly from: number;
  readonly via: number;
  readonly to: number;
}

/** What the signs say. */
export interface Traffic {
  readonly flows: readonly Flow[];
  /** By stretch. */
  readonly tags: readonly Tags[];
  readonly turns: readonly TurnRule[];
  /** A road with a locked gate across it, at one of its inner points. */
  readonly gate: { readonly stretch: number; readonly point: number } | null;
}

/** The pairs run one way as far from the city's middle as this, in metres. */
const ONE_WAY_REACH = 1_150;
const MOST_TURN_RULES = 14;

/** Speed limits in miles per hour, in towns and between them; other streets carry no sign. */
const LIMITS: Readonly<Partial<Record<StreetClass, readonly [town: number, country: number]>>> = {
  primary: [35, 55],
  secondary: [30, 45],
  tertiary: [30, 40],
};
const ONE_WAY_LIMIT = 25;

export function trafficOf(
  seed: number,
  towns: readonly Town[],
  lines: readonly StreetLine[],
  graph: StreetGraph,
): Traffic {
  const flows = flowsOf(towns, lines, graph);
  const tags = graph.stretches.map((stretch, i): Tags => {
    const line = lines[stretch.line]!;
    const limits = LIMITS[line.streetClass];
    const middle = stretch.points[stretch.points.length >> 1]!;
    const isTown = towns.some((town) => distance(middle, town.at) < town.radius * 1.1);
    const limit = flows[i] === 0 ? limits?.[isTown ? 0 : 1] : ONE_WAY_LIMIT;
    return limit === undefined ? {} : { maxspeed: `${limit} mph` };
  });
  return {
    flows,
    tags,
    turns: turnRules(seed, towns[0]!, lines, graph, flows),
    gate: gateOf(lines, graph),
  };
}

/** Pairs of streets beside the city's main street; neighbours run against each other. */
function flowsOf(
  towns: readonly Town[],
  lines: readonly StreetLine[],
  { nodes, stretches }: StreetGraph,
): Flow[] {
  const city = towns[0]!;
  const isNear = (node: number): boolean => distance(nodes[node]!, city.at) < ONE_WAY_REACH;
  const flows = stretches.map(({ line, from, to }): Flow => {
    const own = lines[line]!;
    if (own.town !== city.index || own.part !== 'along' || !isNear(from) || !isNear(to)) return 0;
    const k = Number(/\/a(-?\d+)/.exec(own.street)![1]);
    if (!isOneWay(city, k)) return 0;
    return k === 1 || k === -2 ? 1 : -1;
  });
  // A one-way street that leads into no way out is none.
  for (;;) {
    const mutual = isMutual(nodes.length, stretches, flows);
    const bad = stretches.flatMap(({ from, to }, i) =>
      flows[i] !== 0 && !(mutual[from]! && mutual[to]!) ? [i] : [],
    );
    if (bad.length === 0) return flows;
    for (const i of bad) flows[i] = 0;
  }
}

/** No left turns off the city's main streets, where they meet the larger of the others. */
function turnRules(
  seed: number,
  city: Town,
  lines: readonly StreetLine[],
  { nodes, stretches }: StreetGraph,
  flows: readonly Flow[],
): TurnRule[] {
  const chance = chanceOf(seed, 'turns');
  const ends = new Map<number, number[]>();
  stretches.forEach(({ from, to }, i) => {
    for (const node of [from, to]) ends.set(node, [...(ends.get(node) ?? []), i]);
  });
  const classOf = (stretch: number): StreetClass => lines[stretches[stretch]!.line]!.streetClass;
  const rules: TurnRule[] = [];
  for (const [via, own] of [...ends].sort(([a], [b]) => a - b)) {
    if (own.length !== 4 || distance(nodes[via]!, city.at) > city.radius) continue;
    const main = own.filter((i) => classOf(i) === 'secondary');
    const crossing = own.filter((i) => classOf(i) === 'secondary' || classOf(i) === 'tertiary');
    if (main.length < 2 || crossing.length < 4 || !chance.happens(0.7)) continue;
    for (const from of main) {
      if (rules.length === MOST_TURN_RULES || flows[from] !== 0) continue;
      const to = own.find(
        (other) =>
          other !== from &&
          mayLeaveBy(stretches[other]!, via, flows[other]!) &&
          isLeft(heading(stretches[from]!, via, -1), heading(stretches[other]!, via, 1)),
      );
      if (to !== undefined) rules.push({ kind: 'no_left_turn', from, via, to });
    }
  }
  return rules;
}

const mayLeaveBy = (stretch: Stretch, via: number, flow: Flow): boolean =>
  flow === 0 || (flow === 1 ? stretch.from === via : stretch.to === via);

/** The way that a stretch leads away from a junction (1), or into it (-1). */
function heading({ from, points }: Stretch, via: number, sign: 1 | -1): Point {
  const [a, b] =
    from === via ? [points[0]!, points[1]!] : [points[points.length - 1]!, points.at(-2)!];
  return [(b[0] - a[0]) * sign, (b[1] - a[1]) * sign];
}

/** Whether turning from one heading to another is to the left, by some 50 to 130 degrees. */
function isLeft([ax, ay]: Point, [bx, by]: Point): boolean {
  const cross = ax * by - ay * bx;
  const dot = ax * bx + ay * by;
  return cross > 0 && Math.abs(dot) < 0.64 * Math.sqrt((ax * ax + ay * ay) * (bx * bx + by * by));
}

/** The longest back road whose loss cuts nobody off. */
function gateOf(lines: readonly StreetLine[], graph: StreetGraph): Traffic['gate'] {
  const candidates = graph.stretches
    .map((stretch, index) => ({ stretch, index, metres: lengthOf(stretch.points) }))
    .filter(({ stretch, metres }) => {
      const line = lines[stretch.line]!;
      return (
        line.part === 'rural' &&
        line.streetClass === 'unclassified' &&
        !line.isBridge &&
        stretch.points.length > 4 &&
        metres > 500 &&
        metres < 2_500
      );
    })
    .sort((a, b) => b.metres - a.metres || a.index - b.index);
  for (const { stretch, index } of candidates) {
    const others = graph.stretches.filter((_, i) => i !== index);
    const mutual = isMutual(graph.nodes.length, others, new Array<Flow>(others.length).fill(0));
    if (mutual[stretch.from] && mutual[stretch.to])
      return { stretch: index, point: stretch.points.length >> 1 };
  }
  return null;
}
