import type { Address } from '@shared/contract/calls';

/** How surely the point is the address, as a dispatcher would say it. */
export const ADDRESS_KIND_WORDS: Readonly<Record<Address['kind'], string>> = {
  rooftop: 'at the house',
  interpolated: 'between known numbers',
  corner: 'at the corner',
  street: 'somewhere on the street',
  place: 'at the named place',
  pin: 'point on the map',
  unlocated: 'not on the map yet',
};

const SHORT_WORDS: Readonly<Record<Address['kind'], string>> = {
  rooftop: '',
  interpolated: 'between numbers',
  corner: 'at the corner',
  street: 'on the street',
  place: 'at the place',
  pin: 'pin on the map',
  unlocated: '',
};

/** As `placeDoubt`, for a narrow column. */
export const shortPlaceDoubt = (kind: Address['kind']): string => SHORT_WORDS[kind];

/** What a row in a list says of an address whose point is not the house's own; empty when it is. */
export const placeDoubt = (kind: Address['kind']): string =>
  kind === 'rooftop' || kind === 'unlocated' ? '' : ADDRESS_KIND_WORDS[kind];
