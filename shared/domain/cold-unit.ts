import type { Instant } from './instant';
import type { Span } from './thaw/uncooled-time';

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

/** How a unit is called on every screen. */
export const UNIT_WORDS: Readonly<Record<UnitKind, string>> = {
  refrigerator: 'Refrigerator',
  'fridge-freezer': 'Fridge-freezer',
  'upright-freezer': 'Upright freezer',
  'chest-freezer': 'Chest freezer',
  'walk-in': 'Walk-in',
  'medicine-fridge': 'Medicine fridge',
};

/** A part of a unit with a thaw clock of its own. */
export const COMPARTMENT_KINDS = ['fresh-food', 'freezer', 'medicine', 'commercial-stock'] as const;
export type CompartmentKind = (typeof COMPARTMENT_KINDS)[number];

/** How the compressor is started; it decides which parts a visit may need. */
export const COMPRESSOR_STARTS = ['relay', 'inverter', 'unknown'] as const;
export type CompressorStart = (typeof COMPRESSOR_STARTS)[number];

/** What a unit does for its contents now; `partial` is one that runs but stays warm. */
export const COOLING_NOW = ['none', 'partial', 'unknown'] as const;
export type CoolingNow = (typeof COOLING_NOW)[number];

/** Whether a unit ran while the power was back for a while. */
export const RAN_BETWEEN = ['yes', 'no', 'unknown'] as const;
export type RanBetween = (typeof RAN_BETWEEN)[number];

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

/** Ice or frozen packs put into a refrigerator. No published hour speaks of them. */
export interface Ice {
  readonly at: Instant;
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
  readonly ice: readonly Ice[];
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
  /** When the unit ran meanwhile, before it stopped again; none when nobody is sure that it did. */
  readonly ranSpans?: readonly Span[];
}

/** What a clock has to know of the unit around a compartment. */
export interface UnitOnClock {
  /** Inside volume of the whole unit. */
  readonly cubicFeet: number | null;
  readonly cooling: CoolingNow;
}

/** The power of a call: when it went, and when it was back for a while before it went again. */
export interface PowerTimes {
  readonly lostAt: Instant;
  readonly restoredAt: Instant | null;
  readonly powerOnSpans: readonly Span[];
}

/**
 * The loss as one unit went through it. The power being back is no cooling: only a unit that is known
 * to have run has had any.
 */
export const coolingLoss = (
  { lostAt, restoredAt, powerOnSpans }: PowerTimes,
  ranBetween: RanBetween,
): CoolingLoss => ({
  lostAt,
  restoredAt,
  ranSpans: ranBetween === 'yes' ? powerOnSpans : [],
});

/** Which compartments a unit of each kind has, so that intake can offer them. */
export const COMPARTMENTS_OF: Readonly<Record<UnitKind, readonly CompartmentKind[]>> = {
  refrigerator: ['fresh-food'],
  'fridge-freezer': ['fresh-food', 'freezer'],
  'upright-freezer': ['freezer'],
  'chest-freezer': ['freezer'],
  'walk-in': ['commercial-stock'],
  'medicine-fridge': ['medicine'],
};
