import type { PlanJob } from './problem';

/** The parts that a visit takes, what it takes twice named twice. */
export const partsOf = ({ part, parts }: Pick<PlanJob, 'part' | 'parts'>): readonly string[] =>
  parts ?? (part === undefined ? [] : [part]);

/** How many of each name there are. */
export function counted(names: readonly string[]): ReadonlyMap<string, number> {
  const counts = new Map<string, number>();
  for (const name of names) counts.set(name, (counts.get(name) ?? 0) + 1);
  return counts;
}
