import type { AreaDto, AreaShape } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';
import { outranks } from '@shared/domain/outage-area';
import { isInShape, shapesOverlap } from '@shared/domain/outage-shape';
import type { Instant } from '@shared/domain/instant';

/** An area that covers part of another, and which of the two counts where both are. */
export interface AreaOverlap {
  readonly area: AreaDto;
  /** Calls in both follow this one, and not the one that is looked at. */
  readonly wins: boolean;
}

type Times = { readonly outAt: Instant; readonly backAt: Instant | null };

/** The other areas that share ground with a shape, by name. */
export function overlapsWith(
  shape: AreaShape,
  times: Times,
  others: Iterable<AreaDto>,
  ownId: string | null,
): AreaOverlap[] {
  return [...others]
    .filter(({ id, shape: theirs }) => id !== ownId && shapesOverlap(shape, theirs))
    .map((area) => ({ area, wins: !outranks(times, area) }))
    .sort((a, b) => a.area.name.localeCompare(b.area.name));
}

/**
 * What is said of a call in several areas: whose times count and why. Empty for a call in one area or
 * none, where there is nothing to explain.
 *
 * @param backWords tells when power came back, such as "02:40"
 */
export function manyAreasWords(
  place: LonLat,
  chosenId: string | null,
  areas: Iterable<AreaDto>,
  backWords: (at: Instant) => string,
): string {
  const around = [...areas].filter(({ shape }) => isInShape(place, shape));
  const chosen = around.find(({ id }) => id === chosenId);
  const others = around.filter(({ id }) => id !== chosenId);
  if (!chosen || others.length === 0) return '';
  const back = ({ backAt }: AreaDto): string =>
    backAt === null ? 'still out' : `back ${backWords(backAt)}`;
  const rest = others
    .sort((a, b) => a.name.localeCompare(b.name))
    .map((area) => `${area.name} (${back(area)})`)
    .join(', ');
  const why = whyWords(chosen, others, backWords);
  return `Also inside ${rest}. ${chosen.name} counts, since ${why}.`;
}

function whyWords(
  { backAt }: AreaDto,
  others: readonly AreaDto[],
  backWords: (at: Instant) => string,
): string {
  if (others.some((other) => other.backAt === backAt)) return 'its power went first';
  return backAt === null ? 'it is still out' : `its power came back last (${backWords(backAt)})`;
}
