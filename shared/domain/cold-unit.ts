import type { Instant } from './instant';

/** What stands in the kitchen, the garage or the shop. */
export const UNIT_KINDS = [
  'refrigerator',
  'fridge-freezer',
  'upright-freezer',
  'chest-freezer',
  'walk-in',
  'medicine-fridge',
] as const;
export type UnitKind = (typeof UNIT_KINDS)[number];

/** A part of a unit with a thaw clock of its own. */
export const COMPARTMENT_KINDS = ['fresh-food', 'freezer', 'medicine', 'commercial-stock'] as const;
export type CompartmentKind = (typeof COMPARTMENT_KINDS)[number];

/** How the compressor is started; it decides which parts a visit may need. */
export const COMPRESSOR_STARTS = ['relay', 'inverter', 'unknown'] as const;
export type CompressorStart = (typeof COMPRESSOR_STARTS)[number];

/** How often the door has been opened since cooling stopped; 'few' is once or twice. */
export const DOOR_USES = ['shut', 'few', 'many', 'unknown'] as const;
export type DoorUse = (typeof DOOR_USES)[number];

/** Kept coarse on purpose: no diagnosis is asked for or stored. */
export const MEDICINE_KINDS = [
  'insulin',
  'labelled',
  'label-not-read',
  'injectable',
  'milk-or-formula',
  'frozen-milk',
  'rather-not-say',
] as const;
export type MedicineKind = (typeof MEDICINE_KINDS)[number];

export const INSPECTION_FINDINGS = ['ice-crystals', 'at-or-below-40', 'thawed'] as const;
export type InspectionFinding = (typeof INSPECTION_FINDINGS)[number];

/** A thermometer reading in degrees Fahrenheit, or one line of a kitchen's temperature log. */
export interface Reading {
  readonly at: Instant;
  readonly temperatureF: number;
}

/** A look inside by a named person. */
export interface Inspection {
  readonly at: Instant;
  readonly finding: InspectionFinding;
}

/** Dry ice put into a freezer. */
export interface DryIce {
  readonly at: Instant;
  readonly pounds: number;
  readonly cubicFeet: number;
}

export interface Medicine {
  readonly kind: MedicineKind;
  /** What the label allows out of the refrigerator, in hours and up to which temperature. */
  readonly labelHours: number | null;
  readonly labelMaxF: number | null;
  readonly frozen: boolean;
  readonly hoursAlreadyUnrefrigerated: number;
}

/**
 * What is known of one compartment. `null` always means "nobody knows", and every rule says what
 * it then assumes.
 */
export interface CompartmentFacts {
  readonly kind: CompartmentKind;
  /** Share of the volume that holds food, 0 (empty) to 1 (full). Asked of freezers. */
  readonly fill: number | null;
  readonly door: DoorUse;
  /** Since when the door or lid was found standing open. */
  readonly standingOpenSince: Instant | null;
  /** Room temperature, degrees Fahrenheit. */
  readonly roomF: number | null;
  /** Temperature inside before cooling was lost, degrees Fahrenheit. */
  readonly beforeF: number | null;
  readonly readings: readonly Reading[];
  readonly inspections: readonly Inspection[];
  readonly dryIce: readonly DryIce[];
  /** Only for medicine. */
  readonly medicine: Medicine | null;
  /** Only for commercial stock: was it known to be at or under 41 F when cooling was lost? */
  readonly coldAtLoss: boolean | null;
  /** What the contents are worth, in US cents. */
  readonly valueCents: number;
}

/** When cooling stopped (the earliest plausible moment) and when it came back. */
export interface CoolingLoss {
  readonly lostAt: Instant;
  readonly restoredAt: Instant | null;
}

/** Which compartments a unit of each kind has, so that intake can offer them. */
export const COMPARTMENTS_OF: Readonly<Record<UnitKind, readonly CompartmentKind[]>> = {
  refrigerator: ['fresh-food'],
  'fridge-freezer': ['fresh-food', 'freezer'],
  'upright-freezer': ['freezer'],
  'chest-freezer': ['freezer'],
  'walk-in': ['commercial-stock'],
  'medicine-fridge': ['medicine'],
};
