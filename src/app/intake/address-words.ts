import type { Address } from '@shared/contract/calls';

/** How surely the point is the address, as a dispatcher would say it. */
export const ADDRESS_KIND_WORDS: Readonly<Record<Address['kind'], string>> = {
  rooftop: 'at the house',
  interpolated: 'between two known houses',
  corner: 'at the corner',
  street: 'somewhere on the street',
  place: 'somewhere in the place',
  pin: 'point on the map',
  unlocated: 'not on the map yet',
};
