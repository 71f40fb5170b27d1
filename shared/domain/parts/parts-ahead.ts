import type { PartChance } from '../phone-check/part-chances';
import { PARTS, type Part } from '../skills';
import { chanceOfMore, successCounts } from './poisson-binomial';

/** A van, what is on it, and what each stop of its route may need. */
export interface VanAhead {
  readonly technicianId: string;
  readonly stock: Readonly<Partial<Record<Part, number>>>;
  readonly stops: readonly (readonly PartChance[])[];
}

export interface PartAhead {
  readonly part: Part;
  readonly onVan: number;
  /** How many the stops need on average. */
  readonly expected: number;
  /** The chance that they need more than is on the van. */
  readonly lackChance: number;
  /** How many more make that chance small enough. */
  readonly load: number;
}

export interface VanPartsAhead {
  readonly technicianId: string;
  readonly stops: number;
  /** Only parts that some stop may need; what is most likely lacking first. */
  readonly parts: readonly PartAhead[];
  /** The chance that some part is lacking, taking one part's luck as no hint of another's. */
  readonly lackChance: number;
}

/**
 * A van is loaded so that each part is lacking with one route in twenty at most. Common practice for
 * the service level of stock, no source.
 */
export const MOST_LACK_CHANCE = 0.05;

export function vanPartsAhead({ technicianId, stock, stops }: VanAhead): VanPartsAhead {
  const parts = PARTS.flatMap((part): PartAhead[] => {
    const chances = stops.flatMap((needs) =>
      needs.filter(([needed]) => needed === part).map(([, chance]) => chance),
    );
    if (chances.length === 0) return [];
    const counts = successCounts(chances);
    const onVan = stock[part] ?? 0;
    let load = 0;
    while (chanceOfMore(counts, onVan + load) > MOST_LACK_CHANCE) load++;
    return [
      {
        part,
        onVan,
        expected: chances.reduce((sum, chance) => sum + chance, 0),
        lackChance: chanceOfMore(counts, onVan),
        load,
      },
    ];
  });
  return {
    technicianId,
    stops: stops.length,
    parts: parts.sort((a, b) => b.lackChance - a.lackChance),
    lackChance: 1 - parts.reduce((none, { lackChance }) => none * (1 - lackChance), 1),
  };
}

export interface ShelfPart {
  readonly part: Part;
  /** What the stops on all routes need on average. */
  readonly onRoutes: number;
  /** What the calls that wait without a route need on average. */
  readonly waiting: number;
  readonly onVans: number;
  /** What all vans together should load. */
  readonly load: number;
}

/** All vans together, and what the calls need that no route has yet. */
export function shelfAhead(
  vans: readonly VanAhead[],
  waiting: readonly (readonly PartChance[])[],
): readonly ShelfPart[] {
  const ahead = vans.map(vanPartsAhead);
  return PARTS.flatMap((part): ShelfPart[] => {
    const onRoutes = sum(ahead.map(({ parts }) => find(parts, part)?.expected ?? 0));
    const needed = sum(
      waiting.map((needs) => sum(needs.filter(([one]) => one === part).map(([, c]) => c))),
    );
    if (onRoutes === 0 && needed === 0) return [];
    return [
      {
        part,
        onRoutes,
        waiting: needed,
        onVans: sum(vans.map(({ stock }) => stock[part] ?? 0)),
        load: sum(ahead.map(({ parts }) => find(parts, part)?.load ?? 0)),
      },
    ];
  });
}

const find = (parts: readonly PartAhead[], part: Part): PartAhead | undefined =>
  parts.find((one) => one.part === part);

const sum = (values: readonly number[]): number => values.reduce((total, one) => total + one, 0);
