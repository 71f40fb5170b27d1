import type { OsmRelation } from './osm-model';

/** A rule at a junction, as far as this program applies it. */
export interface TurnRule {
  readonly kind: 'no' | 'only';
  readonly from: readonly number[];
  readonly via: number;
  readonly to: readonly number[];
}

export interface TurnRules {
  readonly rules: readonly TurnRule[];
  /** Restrictions that were left out: over a way instead of a node, for some hours, or incomplete. */
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
    const [from, to, via] = [of('from', 'way'), of('to', 'way'), of('via', 'node')];
    if (kind === undefined || from.length === 0 || to.length === 0 || via.length !== 1) leftOut++;
    else rules.push({ kind, from, via: via[0]!, to });
  }
  return { rules, leftOut };
}
