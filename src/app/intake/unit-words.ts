import type { CompartmentFacts } from '@shared/contract/calls';
import type {
  CompressorStart,
  CoolingNow,
  DoorUse,
  MedicineKind,
  RanBetween,
} from '@shared/domain/cold-unit';
import type { Choice } from './choices';

export const FILL_CHOICES: readonly Choice<number | null>[] = [
  { value: 1, label: 'Full' },
  { value: 0.75, label: 'Three quarters' },
  { value: 0.5, label: 'Half' },
  { value: 0.25, label: 'A quarter' },
  { value: null, label: 'Not known' },
];

export const DOOR_CHOICES: readonly Choice<DoorUse>[] = [
  { value: 'shut', label: 'Kept shut' },
  { value: 'few', label: 'Once or twice' },
  { value: 'many', label: 'Often' },
  { value: 'unknown', label: 'Not known' },
];

export const COLD_AT_LOSS_CHOICES: readonly Choice<boolean | null>[] = [
  { value: true, label: 'Yes' },
  { value: false, label: 'No' },
  { value: null, label: 'Not known' },
];

/** Coarse on purpose; nobody is asked for a diagnosis, and nobody has to answer. */
export const MEDICINE_CHOICES: readonly Choice<MedicineKind>[] = [
  { value: 'rather-not-say', label: 'Rather not say' },
  { value: 'insulin', label: 'Insulin' },
  { value: 'labelled', label: 'Label says how long it may stay warm' },
  { value: 'label-not-read', label: 'Label not read yet' },
  { value: 'injectable', label: 'Vaccine or injectable' },
  { value: 'milk-or-formula', label: 'Breast milk or formula' },
  { value: 'frozen-milk', label: 'Frozen breast milk' },
];

export const START_CHOICES: readonly Choice<CompressorStart>[] = [
  { value: 'relay', label: 'Clicks on and off' },
  { value: 'inverter', label: 'Inverter' },
  { value: 'unknown', label: 'Not known' },
];

export const COOLING_CHOICES: readonly Choice<CoolingNow>[] = [
  { value: 'none', label: 'Nothing, or silent' },
  { value: 'partial', label: 'Runs but stays warm' },
  { value: 'unknown', label: 'Not known' },
];

export const RAN_CHOICES: readonly Choice<RanBetween>[] = [
  { value: 'yes', label: 'It ran and cooled' },
  { value: 'no', label: 'It stayed dead' },
  { value: 'unknown', label: 'Not known' },
];

export type Medicine = NonNullable<CompartmentFacts['medicine']>;
