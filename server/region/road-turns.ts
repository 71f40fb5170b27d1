import type { OsmRelation } from './osm-model';

/** A rule at a junction, or along some ways, as far as this program applies it. */
export interface TurnRule {
  readonly kind: 'no' | 'only';
  readonly from: readonly number[];
  /** The node where it holds, or the ways that it leads over, in their order. */
  readonly via: { readonly node: number } | { readonly ways: readonly number[] };
  readonly to: readonly number[];
}

export interface TurnRules {
  readonly rules: readonly TurnRule[];
  /** Restrictions that were left out: for some hours only, or incomplete. */
  readonly leftOut: number;
}

/** Turn restrictions for a van, after the OpenStreetMap wiki, "Relation:restriction". */
export function turnRulesOf(relations: readonly OsmRelation[]): TurnRules {
  const rules: TurnRule[] = [];
  let leftOut = 0;
  for (const { tags, members } of relations) {
    if (tags['type'] !== 'restriction') continue;
    const said =
      tags['restriction:motorcar'] ?? tags['restriction:motor_vehicle'] ?? tags['restriction'];
    const kind = /^(no|only)_/.exec(said ?? '')?.[1] as TurnRule['kind'] | undefined;
    const except = (tags['except'] ?? '').split(';').map((one) => one.trim());
    if (except.includes('motorcar') || except.includes('motor_vehicle')) continue;
    const of = (role: string, type: string): number[] =>
      members.filter((m) => m.role === role && m.type === type).map(({ ref }) => ref);
    const [from, to, nodes, ways] = [
      of('from', 'way'),
      of('to', 'way'),
      of('via', 'node'),
      of('via', 'way'),
    ];
    const isWhole = kind !== undefined && from.length > 0 && to.length > 0;
    if (isWhole && nodes.length === 1 && ways.length === 0)
      rules.push({ kind, from, via: { node: nodes[0]! }, to });
    else if (isWhole && nodes.length === 0 && ways.length > 0)
      rules.push({ kind, from, via: { ways }, to });
    else leftOut++;
  }
  return { rules, leftOut };
}
