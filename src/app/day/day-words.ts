import type { LonLat } from '@shared/contract/common';
import type { DECLINE_REASONS, StopCard } from '@shared/contract/routes';
import type { VisitOutcome } from '@shared/domain/call-state';
import type { CompartmentKind } from '@shared/domain/cold-unit';
import { type CautionId, CAUTIONS } from '@shared/domain/phone-check/cautions';
import type { Part } from '@shared/domain/skills';
import { COMPARTMENT_WORDS } from '../board/compartment-words';

export type DeclineReason = (typeof DECLINE_REASONS)[number];

export const DECLINE_WORDS: Readonly<Record<DeclineReason, string>> = {
  'missing-part': 'A part is missing on my van',
  'missing-skill': 'It needs a skill that I do not have',
  'road-closed': 'The road is closed',
  unsafe: 'It is not safe there',
  'end-of-shift': 'My shift ends before',
  other: 'Something else',
};

export const OUTCOME_CHOICES: readonly {
  readonly outcome: VisitOutcome;
  readonly label: string;
  readonly means: string;
}[] = [
  { outcome: 'restored', label: 'Cooling again', means: 'It runs and gets cold.' },
  {
    outcome: 'parts-on-order',
    label: 'Needs a part',
    means: 'The desk orders it; somebody comes back.',
  },
  {
    outcome: 'not-repairable',
    label: 'Cannot be repaired',
    means: 'The household is told to replace it.',
  },
  {
    outcome: 'no-access',
    label: 'No access',
    means: 'Nobody home, or no way in. The desk rings them.',
  },
  {
    outcome: 'referred',
    label: 'Another trade',
    means: 'An electrician or the utility has to come first.',
  },
];

/** What must be clear before a hand goes inside the unit. */
export const WORK_CAUTIONS: readonly CautionId[] = [
  'unplug-first',
  'stored-charge',
  'wet-stays-off',
  'refrigerant',
  'licensed-work',
];

export const cautionsFor = (card: Pick<StopCard, 'danger'>) =>
  (card.danger ? (['emergency', ...WORK_CAUTIONS] as const) : WORK_CAUTIONS).map((id) => ({
    id,
    ...CAUTIONS[id],
  }));

/** Common practice, no source; where law forbids a phone in the hand at the wheel, it comes first. */
export const WHEEL_WORDS = 'Hands off this phone while the van moves.';

/**
 * What to tell the household of contents past their save-by; nothing where all of it can still be saved.
 * The words and their sources are those of the cautions.
 */
export function lostContentsWords(lost: readonly { readonly kind: CompartmentKind }[]): string[] {
  const kinds = [...new Set(lost.map(({ kind }) => kind))];
  const food = kinds.filter((kind) => kind !== 'medicine');
  const words: string[] = [];
  if (food.length > 0) {
    const names = food.map((kind) => COMPARTMENT_WORDS[kind].name.toLowerCase()).join(' and ');
    const { 'throw-it-out': out, 'never-taste': taste } = CAUTIONS;
    words.push(`Past its save-by: ${names}. Tell them: ${out.words} ${taste.words}`);
  }
  if (kinds.includes('medicine'))
    words.push(`Past its save-by: medicine. ${CAUTIONS.medicine.words}`);
  return words;
}

/** For the phone's own maps (RFC 5870), with the address as the label of the pin. */
export function geoLink({ address }: Pick<StopCard, 'address'>): string | null {
  if (address.lonLat === null) return null;
  const [lon, lat]: LonLat = address.lonLat;
  const at = `${lat.toFixed(6)},${lon.toFixed(6)}`;
  return `geo:${at}?q=${at}(${encodeURIComponent(address.text)})`;
}

/** "+1 252 555 0142"; the desk's own formatter would carry the numbering plans of the world. */
export const phoneWords = (phone: string): string =>
  phone.replace(/^\+1(\d{3})(\d{3})(\d{4})$/, '($1) $2-$3');

export interface PartToBring {
  readonly part: Part;
  /** How many the van carries, as far as anybody wrote down. */
  readonly onVan: number;
}

export const partsToBring = (
  { parts }: Pick<StopCard, 'parts'>,
  van: Readonly<Partial<Record<Part, number>>>,
): PartToBring[] => parts.map((part) => ({ part, onVan: van[part] ?? 0 }));
