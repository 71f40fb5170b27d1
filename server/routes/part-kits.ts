import { PARTS, type Part } from '@shared/domain/skills';

/**
 * Everything that one repair takes, as one name: the planner counts one part a visit. How often a van
 * can make that repair is how often its scarcest part is there. Two kits may share a part; what a route
 * lacks in the end is worked out part by part when it is settled.
 */
export const kitOf = (parts: readonly Part[]): string =>
  PARTS.filter((part) => parts.includes(part)).join('+');

export const partsOfKit = (kit: string): Part[] =>
  PARTS.filter((part) => kit.split('+').includes(part));

/** How often a van can make each of the repairs; those that it cannot are left out. */
export const kitsOnVan = (
  van: Readonly<Partial<Record<Part, number>>>,
  kits: Iterable<string>,
): Readonly<Record<string, number>> =>
  Object.fromEntries(
    [...kits].flatMap((kit) => {
      const count = Math.min(...partsOfKit(kit).map((part) => van[part] ?? 0));
      return count > 0 ? [[kit, count]] : [];
    }),
  );
