import { parseAddress } from '@shared/domain/address/parse-address';
import type { LonLat } from '../osm-extract';
import type { AddressCells } from './address-columns';

/** An address point of a file, checked; its city may still be missing. */
export interface FileAddress {
  readonly at: LonLat;
  readonly number: string;
  readonly street: string;
  readonly unit: string;
  readonly city: string;
  readonly postcode: string;
}

type Box = readonly [west: number, south: number, east: number, north: number];

/** An address just outside of the extract's outermost node is still of the region; about 2 km. */
const MARGIN_DEGREES = 0.02;

export const isOffTheGlobe = (lon: number, lat: number): boolean =>
  Math.abs(lon) > 180 || Math.abs(lat) > 90;

/** Makes an address point of a row, or says why it is none. */
export function checkRow(
  cells: AddressCells,
  [west, south, east, north]: Box,
): FileAddress | string {
  const { lon: lonText, lat: latText } = cells;
  if (lonText === '' || latText === '') return 'it has no coordinates';
  const lon = Number(lonText.replace(',', '.'));
  const lat = Number(latText.replace(',', '.'));
  if (!Number.isFinite(lon) || !Number.isFinite(lat)) return 'its coordinates are no numbers';
  if (lon === 0 && lat === 0) return 'its coordinates are both zero';
  if (isOffTheGlobe(lon, lat)) return 'its coordinates are no degrees';
  if (
    lon < west - MARGIN_DEGREES ||
    lon > east + MARGIN_DEGREES ||
    lat < south - MARGIN_DEGREES ||
    lat > north + MARGIN_DEGREES
  )
    return 'it lies outside of the extract';

  const { number, street, unit, city } = wordsFrom(cells);
  if (!/\d/.test(number) || /^0+$/.test(number)) return 'it has no house number';
  if (street === '') return 'it has no street';
  if (/\bp\.?\s*o\.?\s*box\b/i.test(street)) return 'it is a post office box';
  if (number.length > 20 || street.length > 100) return 'it is too long for an address';
  return {
    at: [Math.round(lon * 1e7) / 1e7, Math.round(lat * 1e7) / 1e7],
    number: number.toUpperCase(),
    street: written(street),
    unit: unit.toUpperCase(),
    city: written(city).slice(0, 80),
    postcode: /^\d{5}/.exec(cells.postcode)?.[0] ?? cells.postcode.slice(0, 12),
  };
}

type Words = Pick<AddressCells, 'number' | 'street' | 'unit' | 'city'>;

/** The parts of the row, or of the one line that it has instead. */
function wordsFrom(cells: AddressCells): Words {
  if (cells.whole === '' || (cells.number !== '' && cells.street !== '')) return cells;
  const parsed = parseAddress(cells.whole);
  const words = (tokens: readonly string[]): string => tokens.join(' ').toUpperCase();
  return {
    number: cells.number || (parsed.number ?? ''),
    street: cells.street || words(parsed.street),
    unit: cells.unit || (parsed.unit ?? ''),
    city: cells.city || words(parsed.tail.filter((token) => token.length > 2)),
  };
}

/** Files like to shout; the board does not. Names of mixed case are left as they are. */
function written(text: string): string {
  if (text !== text.toUpperCase() || !/[A-Z]{2}/.test(text)) return text;
  return text
    .toLowerCase()
    .replace(
      /(^|[\s\-./(])([a-z])/g,
      (_, before: string, letter: string) => before + letter.toUpperCase(),
    )
    .replace(/\b(Ne|Nw|Se|Sw)\b/g, (direction) => direction.toUpperCase());
}
