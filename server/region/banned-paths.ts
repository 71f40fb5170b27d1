import type { LanePath } from '@shared/domain/roads/build-graph';
import type { OsmWay } from './osm-model';
import type { TurnRule } from './road-turns';

/** A lane of the network: between which nodes, and on which ways it begins and ends. */
export interface DrivenLane {
  readonly lane: number;
  readonly from: number;
  readonly to: number;
  readonly first: number;
  readonly last: number;
}

/** A rule with the nodes of the extract between its ways: one where it holds at a node, else all ends of its ways. */
export interface RuleInPlace {
  readonly rule: TurnRule;
  readonly nodes: readonly number[];
}

/** Finds the nodes that each rule leads over; a rule whose ways do not hang together is left out. */
export function rulesInPlace(
  rules: readonly TurnRule[],
  ways: ReadonlyMap<number, Pick<OsmWay, 'refs'>>,
): RuleInPlace[] {
  return rules.flatMap((rule): RuleInPlace[] => {
    const nodes = 'node' in rule.via ? [rule.via.node] : nodesOver(rule, rule.via.ways, ways);
    return nodes ? [{ rule, nodes }] : [];
  });
}

/** From where the way that is come from meets the first way to where the last meets the one that is gone to. */
function nodesOver(
  { from, to }: TurnRule,
  over: readonly number[],
  ways: ReadonlyMap<number, Pick<OsmWay, 'refs'>>,
): number[] | null {
  const endsOf = (way: number): readonly number[] => {
    const { refs } = ways.get(way) ?? { refs: [] };
    return refs.length > 1 ? [refs[0]!, refs.at(-1)!] : [];
  };
  const isOn = (some: readonly number[], node: number): boolean =>
    some.some((way) => ways.get(way)?.refs.includes(node) ?? false);
  const starts = endsOf(over[0]!).filter((node) => isOn(from, node));
  for (const start of starts) {
    const nodes = [start];
    for (const way of over) {
      const [a, b] = endsOf(way);
      const here = nodes.at(-1)!;
      if (a === b || a === undefined || b === undefined || (a !== here && b !== here)) break;
      nodes.push(a === here ? b : a);
    }
    if (nodes.length === over.length + 1 && isOn(to, nodes.at(-1)!)) return nodes;
  }
  return null;
}

/**
 * Turns rules about ways into paths of lanes that nobody may drive.
 *
 * A rule of the kind "only" over ways is read strictly, after the same page of the wiki: who comes from
 * its first road may only go along the ways, and at their end only to its last road.
 */
export function bannedPaths(
  lanes: readonly DrivenLane[],
  rules: readonly RuleInPlace[],
  numberOf: ReadonlyMap<number, number>,
): { readonly paths: readonly LanePath[]; readonly applied: number } {
  const arriving = grouped(lanes, ({ to }) => to);
  const leaving = grouped(lanes, ({ from }) => from);
  const paths: LanePath[] = [];
  let applied = 0;
  for (const { rule, nodes } of rules) {
    const { kind, from, to } = rule;
    const numbers = nodes.map((node) => numberOf.get(node) ?? -1);
    const entries = (arriving.get(numbers[0]!) ?? []).filter(({ last }) => from.includes(last));
    const exits = leaving.get(numbers.at(-1)!) ?? [];
    const over = 'node' in rule.via ? [] : lanesOver(rule.via.ways, numbers, leaving);
    if (!over || entries.length === 0 || !exits.some(({ first }) => to.includes(first))) continue;
    applied++;
    for (const entry of entries) {
      const driven = [entry, ...over];
      for (const exit of exits)
        if (isBanned(rule, driven.at(-1)!, exit))
          paths.push([...driven, exit].map(({ lane }) => lane));
      if (kind === 'only') paths.push(...asides(driven, leaving));
    }
  }
  return { paths, applied };
}

function isBanned(
  { kind, from, via, to }: TurnRule,
  before: DrivenLane,
  exit: DrivenLane,
): boolean {
  const isNamed = to.includes(exit.first);
  // A way that is named twice forbids turning round on it, not going straight on along it.
  if ('node' in via && isNamed && from.includes(exit.first))
    return kind === 'no' && (before.lane ^ 1) === exit.lane;
  return kind === 'no' ? isNamed : !isNamed;
}

/** The ways off a path before its end. */
function asides(
  driven: readonly DrivenLane[],
  leaving: ReadonlyMap<number, readonly DrivenLane[]>,
): LanePath[] {
  return driven.slice(1).flatMap((next, i) => {
    const before = driven.slice(0, i + 1).map(({ lane }) => lane);
    return (leaving.get(next.from) ?? [])
      .filter(({ lane }) => lane !== next.lane)
      .map(({ lane }) => [...before, lane]);
  });
}

/** The lanes along some ways, one way after the other; null where one may not be driven that way. */
function lanesOver(
  ways: readonly number[],
  nodes: readonly number[],
  leaving: ReadonlyMap<number, readonly DrivenLane[]>,
): DrivenLane[] | null {
  const over: DrivenLane[] = [];
  for (const [i, way] of ways.entries()) {
    let at = nodes[i]!;
    // A way has fewer lanes than the network; one that runs in a circle is given up.
    for (const seen = new Set<number>(); at !== nodes[i + 1];) {
      const before = over.at(-1)?.lane ?? -1;
      const next = (leaving.get(at) ?? []).find(
        ({ first, lane }) => first === way && lane !== (before ^ 1),
      );
      if (!next || seen.has(next.lane)) return null;
      seen.add(next.lane);
      over.push(next);
      at = next.to;
    }
  }
  return over;
}

function grouped(
  lanes: readonly DrivenLane[],
  nodeOf: (lane: DrivenLane) => number,
): ReadonlyMap<number, readonly DrivenLane[]> {
  const groups = new Map<number, DrivenLane[]>();
  for (const lane of lanes) {
    const own = groups.get(nodeOf(lane));
    if (own) own.push(lane);
    else groups.set(nodeOf(lane), [lane]);
  }
  return groups;
}
