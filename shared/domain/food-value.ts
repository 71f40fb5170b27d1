import type { CompartmentKind, UnitKind } from './cold-unit';

/**
 * What the contents of a compartment are worth until somebody says otherwise, in US cents.
 *
 * Our estimates, always editable, set against two weak published figures: a household loses "$200
 * to $600" in a long outage (a food site, no method), and home insurance commonly covers $500
 * of spoiled food.
 */
const DEFAULT_CENTS: Readonly<Record<CompartmentKind, number>> = {
  'fresh-food': 150_00,
  freezer: 200_00,
  medicine: 300_00,
  'commercial-stock': 4_000_00,
};

/** A freezer that stands alone holds more than the freezer section of a refrigerator. */
const ALONE_CENTS: Partial<Readonly<Record<UnitKind, number>>> = {
  'chest-freezer': 400_00,
  'upright-freezer': 300_00,
};

export const defaultValueCents = (unit: UnitKind, compartment: CompartmentKind): number =>
  (compartment === 'freezer' ? ALONE_CENTS[unit] : undefined) ?? DEFAULT_CENTS[compartment];
