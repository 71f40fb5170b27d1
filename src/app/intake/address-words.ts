import type { RegionDto } from '@shared/contract/areas';
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

/** The address as it is read out, and in brackets how surely its point is known where it is not the house's own. */
export const addressWords = ({ text, unitNo, kind }: Address): string =>
  [text, unitNo].filter(Boolean).join(', ') + (placeDoubt(kind) && ` (${placeDoubt(kind)})`);

/** What a row in a list says of an address whose point is not the house's own; empty when it is. */
export const placeDoubt = (kind: Address['kind']): string =>
  kind === 'rooftop' || kind === 'unlocated' ? '' : ADDRESS_KIND_WORDS[kind];

/**
 * How surely the point is the address, or that it lies outside of the region in use: then the call is
 * of another one, and kept its place when the region was switched.
 */
export function placeWords(
  { kind, lonLat }: Pick<Address, 'kind' | 'lonLat'>,
  region: Pick<RegionDto, 'bbox'> | null,
): string {
  if (lonLat === null || !region) return ADDRESS_KIND_WORDS[kind];
  const [lon, lat] = lonLat;
  const [west, south, east, north] = region.bbox;
  const isInside = lon >= west && lon <= east && lat >= south && lat <= north;
  return isInside ? ADDRESS_KIND_WORDS[kind] : 'not in this region';
}
