import type { CompartmentFacts } from '@shared/contract/calls';
import type { InspectionFinding } from '@shared/domain/cold-unit';
import type { Instant } from '@shared/domain/instant';

export const FINDING_CHOICES: readonly {
  readonly value: InspectionFinding;
  readonly label: string;
}[] = [
  { value: 'ice-crystals', label: 'Ice crystals' },
  { value: 'at-or-below-40', label: '40 °F or below' },
  { value: 'thawed', label: 'Thawed' },
];

/** What was found in a compartment and done for it, in its order. */
export function foundWords(
  { readings, inspections, dryIce, ice }: CompartmentFacts,
  dayTime: (at: Instant) => string,
): string {
  return [
    ...readings.map(({ at, temperatureF }) => ({ at, words: `${temperatureF} °F` })),
    ...inspections.map(({ at, finding }) => ({
      at,
      words: FINDING_CHOICES.find(({ value }) => value === finding)?.label ?? finding,
    })),
    ...dryIce.map(({ at, pounds, cubicFeet }) => ({
      at,
      words: `${pounds} lb dry ice in ${cubicFeet} cu ft`,
    })),
    ...ice.map(({ at }) => ({ at, words: 'ice put in' })),
  ]
    .sort((a, b) => a.at - b.at)
    .map(({ at, words }) => `${words}, ${dayTime(at)}`)
    .join('; ');
}
