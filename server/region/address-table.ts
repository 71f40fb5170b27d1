import { canonicalWords } from '@shared/domain/address/street-words';
import { tokensOf } from '@shared/domain/address/address-tokens';
import type { AddressBook } from './address-points';
import type { LonLat } from './osm-extract';

/**
 * An address book in columns: a million addresses take some 20 MB instead of hundreds. Texts are
 * numbers of `strings`, places whole 1e-7 degrees. Streets are sorted by name and city, houses by
 * street and number, corners by their two names.
 */
export interface AddressTable {
  readonly strings: readonly string[];
  /** One row for each street of a city. */
  readonly streets: {
    readonly name: Uint32Array;
    readonly city: Uint32Array;
    readonly lon: Int32Array;
    readonly lat: Int32Array;
    /** First house of each street, and the number of houses at the end. */
    readonly houses: Uint32Array;
    /** First number range of each street, and the number of ranges at the end. */
    readonly ranges: Uint32Array;
  };
  readonly houses: {
    readonly number: Uint32Array;
    readonly postcode: Uint32Array;
    readonly flats: Uint16Array;
    readonly lon: Int32Array;
    readonly lat: Int32Array;
  };
  readonly ranges: {
    readonly from: Uint32Array;
    readonly to: Uint32Array;
    /** Of its numbers: each, or each second. */
    readonly step: Uint8Array;
    readonly postcode: Uint32Array;
    /** First point of each line, and the number of points at the end. */
    readonly points: Uint32Array;
  };
  readonly rangePoints: { readonly lon: Int32Array; readonly lat: Int32Array };
  /** Other names of streets: "Highway 30". */
  readonly aliases: { readonly name: Uint32Array; readonly street: Uint32Array };
  /** Names as in `streets`; the first sorts before the second. */
  readonly corners: {
    readonly first: Uint32Array;
    readonly second: Uint32Array;
    readonly city: Uint32Array;
    readonly lon: Int32Array;
    readonly lat: Int32Array;
  };
  readonly places: {
    readonly name: Uint32Array;
    readonly kind: Uint32Array;
    readonly city: Uint32Array;
    readonly street: Uint32Array;
    readonly lon: Int32Array;
    readonly lat: Int32Array;
  };
}

/** How a road is called by its number. */
export const ROUTE = 'Highway ';

const SCALE = 1e7;
export const packed = (degrees: number): number => Math.round(degrees * SCALE);
export const lonLatAt = (
  { lon, lat }: { readonly lon: Int32Array; readonly lat: Int32Array },
  i: number,
): LonLat => [lon[i]! / SCALE, lat[i]! / SCALE];

/** The words of a name in one spelling each. */
export const wordsOf = (text: string): string[] => canonicalWords(tokensOf(text));

/** Gives each text its number. */
export class StringTable {
  readonly strings: string[] = [];
  private readonly known = new Map<string, number>();

  number(text: string): number {
    const found = this.known.get(text);
    if (found !== undefined) return found;
    this.known.set(text, this.strings.length);
    return this.strings.push(text) - 1;
  }
}

/** The book that a table was made from; houses come in the order of their streets. */
export function unpackAddressBook(table: AddressTable): AddressBook {
  const { strings, streets, houses, ranges, aliases, corners, places } = table;
  const text = (numbers: Uint32Array, i: number): string => strings[numbers[i]!] ?? '';
  const addresses: AddressBook['addresses'][number][] = [];
  const numberRanges: NonNullable<AddressBook['ranges']>[number][] = [];
  streets.name.forEach((_, i) => {
    const own = { street: text(streets.name, i), city: text(streets.city, i) };
    for (let house = streets.houses[i]!; house < streets.houses[i + 1]!; house++) {
      addresses.push({
        ...own,
        at: lonLatAt(houses, house),
        number: text(houses.number, house),
        postcode: text(houses.postcode, house),
        flats: houses.flats[house]!,
      });
    }
    for (let range = streets.ranges[i]!; range < streets.ranges[i + 1]!; range++) {
      const line: LonLat[] = [];
      for (let p = ranges.points[range]!; p < ranges.points[range + 1]!; p++)
        line.push(lonLatAt(table.rangePoints, p));
      numberRanges.push({
        ...own,
        from: text(ranges.from, range),
        to: text(ranges.to, range),
        step: ranges.step[range] === 2 ? 2 : 1,
        postcode: text(ranges.postcode, range),
        line,
      });
    }
  });
  return {
    addresses,
    ranges: numberRanges,
    routes: Array.from(aliases.name, (_, i) => ({
      number: text(aliases.name, i).replace(ROUTE, ''),
      street: text(aliases.street, i),
    })),
    streets: Array.from(streets.name, (_, i) => ({
      name: text(streets.name, i),
      city: text(streets.city, i),
      at: lonLatAt(streets, i),
    })),
    corners: Array.from(corners.first, (_, i) => ({
      first: text(corners.first, i),
      second: text(corners.second, i),
      city: text(corners.city, i),
      at: lonLatAt(corners, i),
    })),
    places: Array.from(places.name, (_, i) => ({
      name: text(places.name, i),
      kind: text(places.kind, i),
      city: text(places.city, i),
      street: text(places.street, i),
      at: lonLatAt(places, i),
    })),
  };
}
