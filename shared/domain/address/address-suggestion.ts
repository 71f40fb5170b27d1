/**
 * How well a place is known, from a house's own point to a guess: `rooftop` a known address,
 * `interpolated` between known neighbours, `corner` where two streets meet, `street` somewhere on
 * it, `place` a named place, `pin` a point set on the map by hand.
 */
export const ADDRESS_KINDS = [
  'rooftop',
  'interpolated',
  'corner',
  'street',
  'place',
  'pin',
] as const;
export type AddressKind = (typeof ADDRESS_KINDS)[number];

export interface AddressSuggestion {
  /** One line for a list, without the unit: that is the call's, not the point's. */
  readonly label: string;
  readonly number: string | null;
  /** As the post writes it: "N Heron St". Of a corner both streets; of a place its name. */
  readonly street: string;
  /** "Apt 4". */
  readonly unit: string | null;
  readonly city: string;
  readonly postcode: string;
  readonly lon: number;
  readonly lat: number;
  readonly kind: AddressKind;
  /** 0 to 1; at or above ACCEPT_CONFIDENCE nobody need look. */
  readonly confidence: number;
}

/** From here on a match may be taken without a person's look. Our estimate. */
export const ACCEPT_CONFIDENCE = 0.8;
