import type { CompartmentFacts, CompartmentKind, UnitKind } from './cold-unit';

/**
 * What the contents of a compartment are worth until somebody says otherwise, in US dollars, for a
 * unit of usual size that is three quarters full.
 *
 * Our estimates, for the manager to change, set against two weak published figures: a household loses
 * "$200 to $600" in a long outage (a food site, no method), and home insurance commonly covers $500
 * of spoiled food.
 */
export interface UsualValues {
  readonly valueFreshFood: number;
  readonly valueFreezerSection: number;
  readonly valueUprightFreezer: number;
  readonly valueChestFreezer: number;
  readonly valueMedicine: number;
  readonly valueStock: number;
}

export const DEFAULT_VALUES: UsualValues = {
  valueFreshFood: 150,
  valueFreezerSection: 200,
  valueUprightFreezer: 300,
  valueChestFreezer: 400,
  valueMedicine: 300,
  valueStock: 4_000,
};

/** Inside volume of a usual unit, cubic feet. Our estimates, no source. */
export const USUAL_CUBIC_FEET: Readonly<Record<UnitKind, number>> = {
  refrigerator: 16,
  'fridge-freezer': 20,
  'upright-freezer': 16,
  'chest-freezer': 15,
  'walk-in': 400,
  'medicine-fridge': 5,
};

const USUAL_FILL = 0.75;

/** A small unit is worth at least this share of a usual one, and a large one at most so many times it. */
const LEAST_SIZE = 0.25;
const MOST_SIZE = 3;

export interface UnitToValue {
  readonly kind: UnitKind;
  readonly cubicFeet: number | null;
}

/**
 * The usual worth of a compartment, US cents, in whole five dollars. Food goes with the size of the
 * unit and with how full it is; medicine with neither.
 */
export function usualValueCents(
  unit: UnitToValue,
  { kind, fill }: Pick<CompartmentFacts, 'kind' | 'fill'>,
  values: UsualValues = DEFAULT_VALUES,
): number {
  const dollars = usualDollars(unit.kind, kind, values);
  if (kind === 'medicine') return dollars * 100;
  const size = (unit.cubicFeet ?? USUAL_CUBIC_FEET[unit.kind]) / USUAL_CUBIC_FEET[unit.kind];
  const share =
    Math.min(MOST_SIZE, Math.max(LEAST_SIZE, size)) * ((fill ?? USUAL_FILL) / USUAL_FILL);
  return share === 1 ? dollars * 100 : Math.round((dollars * share) / 5) * 500;
}

/** Of a unit of which nothing else is known. */
export const defaultValueCents = (
  unit: UnitKind,
  kind: CompartmentKind,
  values: UsualValues = DEFAULT_VALUES,
): number => usualValueCents({ kind: unit, cubicFeet: null }, { kind, fill: null }, values);

function usualDollars(unit: UnitKind, kind: CompartmentKind, values: UsualValues): number {
  switch (kind) {
    case 'fresh-food':
      return values.valueFreshFood;
    case 'medicine':
      return values.valueMedicine;
    case 'commercial-stock':
      return values.valueStock;
    case 'freezer':
      if (unit === 'chest-freezer') return values.valueChestFreezer;
      // A freezer that stands alone holds more than the freezer section of a refrigerator.
      return unit === 'upright-freezer' ? values.valueUprightFreezer : values.valueFreezerSection;
  }
}
