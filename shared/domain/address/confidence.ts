import type { AddressKind } from './address-suggestion';

/** How far a kind of match can be trusted when the words fit exactly. Our estimate. */
const TRUST: Readonly<Record<AddressKind, number>> = {
  rooftop: 1,
  interpolated: 0.84,
  corner: 0.9,
  street: 0.5,
  place: 0.6,
  pin: 1,
};

/**
 * Two answers this close in cost are a question for a person; farther ones still when no town was
 * said or the house itself is not known. Our estimates.
 */
export const tooClose = (kind: AddressKind, isPlaced: boolean): number =>
  kind === 'rooftop' && isPlaced ? 0.3 : 0.4;

/** What is known about an answer when its confidence is worked out. */
export interface Evidence {
  readonly kind: AddressKind;
  readonly cost: number;
  /** A town or a postcode was said, or there is one town only. */
  readonly isPlaced: boolean;
  /** Something that was said speaks against it. */
  readonly isAgainst: boolean;
  /** Another place fits nearly as well. */
  readonly isDisputed: boolean;
}

/**
 * Confidence in an answer, 0 to 1. What is disputed or contradicted stays below ACCEPT_CONFIDENCE
 * however small its cost, for a technician would be sent to another house.
 */
export function confidenceOf({ kind, cost, isPlaced, isAgainst, isDisputed }: Evidence): number {
  const doubt = (isDisputed ? 0.6 : 1) * (isAgainst ? 0.7 : 1) * (isPlaced ? 1 : 0.9);
  return Math.round(TRUST[kind] * Math.max(0, 1 - 0.4 * cost) * doubt * 100) / 100;
}
