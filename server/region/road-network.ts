import type { Segment, SegmentsAndTurns } from '@shared/domain/roads/build-graph';
import { ROAD_CLASSES } from '@shared/domain/roads/road-class';
import { SEGMENT_FLAGS } from '@shared/domain/roads/road-graph';
import type { OsmExtract } from './osm-extract';
import { roadPieces, type RoadPiece, type RoadPieces } from './road-pieces';
import { turnRulesOf, type TurnRule } from './road-turns';

export interface RoadNetwork extends SegmentsAndTurns {
  /** Road names; the first is none. */
  readonly names: readonly string[];
  readonly turnRules: number;
  /** Turn restrictions that could not be applied. */
  readonly turnRulesLeftOut: number;
}

/** The roads of an extract: pieces that meet nobody else joined to segments, and the banned turns. */
export function roadNetwork(extract: OsmExtract): RoadNetwork {
  const { rules, leftOut } = turnRulesOf(extract.relations);
  const cut = roadPieces(extract, new Set(rules.map(({ via }) => via)));
  const vias = new Set(rules.flatMap(({ via }) => cut.numberOf.get(via) ?? []));
  const chains = joinedPieces(cut, vias);
  const names = [''];
  const nameNumber = new Map([['', 0]]);
  const number = (name: string): number => {
    const known = nameNumber.get(name);
    if (known !== undefined) return known;
    nameNumber.set(name, names.length);
    return names.push(name) - 1;
  };
  const segments = chains.map((chain) => segmentOf(chain, number));
  const banned = bannedTurns(chains, segments, rules, cut.numberOf);
  return {
    junctions: cut.nodes,
    segments,
    bannedTurns: banned.turns,
    names,
    turnRules: rules.length - banned.leftOut,
    turnRulesLeftOut: leftOut + banned.leftOut,
  };
}

/** A piece as a chain goes along it. */
interface Link {
  readonly piece: RoadPiece;
  readonly isTurned: boolean;
}
type Chain = readonly Link[];

const startOf = ({ piece, isTurned }: Link): number => (isTurned ? piece.to : piece.from);
const endOf = ({ piece, isTurned }: Link): number => (isTurned ? piece.from : piece.to);
const ahead = ({ piece, isTurned }: Link): number => (isTurned ? piece.againstMs : piece.alongMs);
const backwards = ({ piece, isTurned }: Link): number =>
  isTurned ? piece.alongMs : piece.againstMs;

function joinedPieces({ pieces, nodes }: RoadPieces, fixed: ReadonlySet<number>): Chain[] {
  const at: RoadPiece[][] = Array.from({ length: nodes }, () => []);
  for (const piece of pieces) {
    at[piece.from]!.push(piece);
    at[piece.to]!.push(piece);
  }
  const used = new Set<RoadPiece>();
  /** The one link that a chain can only go on with, or null where it ends. */
  const next = (link: Link): Link | null => {
    const node = endOf(link);
    const here = at[node]!;
    if (fixed.has(node) || here.length !== 2) return null;
    const other = here[0] === link.piece ? here[1]! : here[0]!;
    if (used.has(other) || other === link.piece) return null;
    const following: Link = { piece: other, isTurned: other.from !== node };
    return isAlike(link, following) ? following : null;
  };
  const grow = (first: Link): Link[] => {
    const links: Link[] = [];
    for (let link = next(first); link; link = next(link)) {
      used.add(link.piece);
      links.push(link);
    }
    return links;
  };
  const chains: Chain[] = [];
  for (const piece of pieces) {
    if (used.has(piece)) continue;
    used.add(piece);
    const onward = grow({ piece, isTurned: false });
    const before = grow({ piece, isTurned: true });
    chains.push([
      ...before.reverse().map((link) => ({ piece: link.piece, isTurned: !link.isTurned })),
      { piece, isTurned: false },
      ...onward,
    ]);
  }
  return chains;
}

/** Whether two pieces may become one: nothing that conditions or the screen ask for differs. */
function isAlike(a: Link, b: Link): boolean {
  return (
    a.piece.road.roadClass === b.piece.road.roadClass &&
    a.piece.road.isBridge === b.piece.road.isBridge &&
    a.piece.isFord === b.piece.isFord &&
    a.piece.road.name === b.piece.road.name &&
    ahead(a) > 0 === ahead(b) > 0 &&
    backwards(a) > 0 === backwards(b) > 0
  );
}

function segmentOf(chain: Chain, nameNumber: (name: string) => number): Segment {
  const [first, last] = [chain[0]!, chain.at(-1)!];
  const { road, isFord } = first.piece;
  const total = (of: (link: Link) => number): number =>
    chain.reduce((sum, link) => sum + of(link), 0);
  const points = (of: (piece: RoadPiece) => readonly number[]): number[] =>
    chain.flatMap(({ piece, isTurned }, i) => {
      const own = isTurned ? [...of(piece)].reverse() : of(piece);
      return i === 0 ? own : own.slice(1);
    });
  return {
    from: startOf(first),
    to: endOf(last),
    alongMs: total(ahead),
    againstMs: total(backwards),
    dm: Math.round(total(({ piece }) => piece.metres) * 10),
    roadClass: ROAD_CLASSES.indexOf(road.roadClass),
    flags: (road.isBridge ? SEGMENT_FLAGS.bridge : 0) + (isFord ? SEGMENT_FLAGS.ford : 0),
    name: nameNumber(road.name),
    lons: points(({ lons }) => lons),
    lats: points(({ lats }) => lats),
  };
}

/** Turns rules about ways into turns from lane to lane. */
function bannedTurns(
  chains: readonly Chain[],
  segments: readonly Segment[],
  rules: readonly TurnRule[],
  numberOf: ReadonlyMap<number, number>,
): { readonly turns: Map<number, Set<number>>; readonly leftOut: number } {
  const arriving = new Map<number, { readonly lane: number; readonly way: number }[]>();
  const leaving = new Map<number, { readonly lane: number; readonly way: number }[]>();
  const put = (map: typeof arriving, node: number, lane: number, way: number): void => {
    const own = map.get(node);
    if (own) own.push({ lane, way });
    else map.set(node, [{ lane, way }]);
  };
  chains.forEach((chain, i) => {
    const { from, to, alongMs, againstMs } = segments[i]!;
    const [first, last] = [chain[0]!.piece.way, chain.at(-1)!.piece.way];
    if (alongMs > 0) {
      put(leaving, from, i * 2, first);
      put(arriving, to, i * 2, last);
    }
    if (againstMs > 0) {
      put(leaving, to, i * 2 + 1, last);
      put(arriving, from, i * 2 + 1, first);
    }
  });
  const turns = new Map<number, Set<number>>();
  let leftOut = 0;
  for (const { kind, from, via, to } of rules) {
    const node = numberOf.get(via) ?? -1;
    const exits = leaving.get(node) ?? [];
    const isBanned = (lane: number, exit: { readonly lane: number; readonly way: number }) => {
      const isNamed = to.includes(exit.way);
      // A way that is named twice forbids turning round on it, not going straight on along it.
      if (isNamed && from.includes(exit.way)) return kind === 'no' && (lane ^ 1) === exit.lane;
      return kind === 'no' ? isNamed : !isNamed;
    };
    const entries = (arriving.get(node) ?? []).filter(({ way }) => from.includes(way));
    if (entries.length === 0 || !exits.some(({ way }) => to.includes(way))) {
      leftOut++;
      continue;
    }
    for (const { lane } of entries) {
      const own = turns.get(lane) ?? new Set<number>();
      turns.set(lane, own);
      for (const exit of exits) if (isBanned(lane, exit)) own.add(exit.lane);
    }
  }
  return { turns, leftOut };
}
