import type { Segment, SegmentsAndTurns } from '@shared/domain/roads/build-graph';
import { ROAD_CLASSES } from '@shared/domain/roads/road-class';
import { SEGMENT_FLAGS } from '@shared/domain/roads/road-graph';
import type { OsmExtract } from './osm-extract';
import { roadPieces, type RoadPiece, type RoadPieces } from './road-pieces';
import { bannedPaths, type DrivenLane, rulesInPlace } from './banned-paths';
import { turnRulesOf } from './road-turns';

export interface RoadNetwork extends SegmentsAndTurns {
  /** Road names; the first is none. */
  readonly names: readonly string[];
  readonly turnRules: number;
  /** Turn restrictions that could not be applied. */
  readonly turnRulesLeftOut: number;
}

/** The roads of an extract: pieces that meet nobody else joined to segments, and what nobody may drive. */
export function roadNetwork(extract: OsmExtract): RoadNetwork {
  const { rules, leftOut } = turnRulesOf(extract.relations);
  const placed = rulesInPlace(rules, extract.ways);
  const fixed = new Set(placed.flatMap(({ nodes }) => nodes));
  const cut = roadPieces(extract, fixed);
  const chains = joinedPieces(
    cut,
    new Set([...fixed].flatMap((node) => cut.numberOf.get(node) ?? [])),
  );
  const names = [''];
  const nameNumber = new Map([['', 0]]);
  const number = (name: string): number => {
    const known = nameNumber.get(name);
    if (known !== undefined) return known;
    nameNumber.set(name, names.length);
    return names.push(name) - 1;
  };
  const segments = chains.map((chain) => segmentOf(chain, number));
  const banned = bannedPaths(lanesOf(chains, segments), placed, cut.numberOf);
  return {
    junctions: cut.nodes,
    segments,
    bannedPaths: banned.paths,
    names,
    turnRules: banned.applied,
    turnRulesLeftOut: leftOut + rules.length - banned.applied,
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
    a.piece.road.isForVisits === b.piece.road.isForVisits &&
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
    flags:
      (road.isBridge ? SEGMENT_FLAGS.bridge : 0) +
      (isFord ? SEGMENT_FLAGS.ford : 0) +
      (road.isForVisits ? SEGMENT_FLAGS.destination : 0),
    name: nameNumber(road.name),
    lons: points(({ lons }) => lons),
    lats: points(({ lats }) => lats),
  };
}

/** The lanes that may be driven, with the ways that they begin and end on. */
function lanesOf(chains: readonly Chain[], segments: readonly Segment[]): DrivenLane[] {
  return chains.flatMap((chain, i): DrivenLane[] => {
    const { from, to, alongMs, againstMs } = segments[i]!;
    const [first, last] = [chain[0]!.piece.way, chain.at(-1)!.piece.way];
    return [
      ...(alongMs > 0 ? [{ lane: i * 2, from, to, first, last }] : []),
      ...(againstMs > 0 ? [{ lane: i * 2 + 1, from: to, to: from, first: last, last: first }] : []),
    ];
  });
}
