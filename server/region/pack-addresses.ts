import { houseNumberOrder } from '@shared/domain/address/house-number';
import type { AddressBook, AddressPoint, NumberRange } from './address-points';
import { packed, ROUTE, StringTable, wordsOf, type AddressTable } from './address-table';
import type { LonLat } from './osm-extract';

/** A street of a city while its houses are gathered. */
interface Street {
  readonly name: string;
  readonly city: string;
  readonly at: LonLat;
  readonly houses: AddressPoint[];
  readonly ranges: NumberRange[];
}

/** Groups a book by street and city and sorts it; all spellings of one street's name become one. */
export function packAddressBook(book: AddressBook): AddressTable {
  const spelling = new Spellings();
  const streets = gatherStreets(book, spelling);
  const strings = new StringTable();
  const text = (texts: readonly string[]): Uint32Array =>
    Uint32Array.from(texts, (one) => strings.number(one));
  const houses = streets.flatMap((street) => street.houses);
  const ranges = streets.flatMap((street) => street.ranges);
  const routes = book.routes ?? [];
  const corners = sortedCorners(book, spelling);
  return {
    streets: {
      name: text(streets.map(({ name }) => name)),
      city: text(streets.map(({ city }) => city)),
      ...columns(streets.map(({ at }) => at)),
      houses: starts(streets.map((street) => street.houses.length)),
      ranges: starts(streets.map((street) => street.ranges.length)),
    },
    houses: {
      number: text(houses.map(({ number }) => number)),
      postcode: text(houses.map(({ postcode }) => postcode)),
      flats: Uint16Array.from(houses, ({ flats }) => flats),
      ...columns(houses.map(({ at }) => at)),
    },
    ranges: {
      from: text(ranges.map(({ from }) => from)),
      to: text(ranges.map(({ to }) => to)),
      step: Uint8Array.from(ranges, ({ step }) => step),
      postcode: text(ranges.map(({ postcode }) => postcode)),
      points: starts(ranges.map(({ line }) => line.length)),
    },
    rangePoints: columns(ranges.flatMap(({ line }) => [...line])),
    aliases: {
      name: text(routes.map(({ number }) => ROUTE + number)),
      street: text(routes.map(({ street }) => spelling.of(street))),
    },
    corners: {
      first: text(corners.map(({ first }) => first)),
      second: text(corners.map(({ second }) => second)),
      city: text(corners.map(({ city }) => city)),
      ...columns(corners.map(({ at }) => at)),
    },
    places: {
      name: text(book.places.map(({ name }) => name)),
      kind: text(book.places.map(({ kind }) => kind)),
      city: text(book.places.map(({ city }) => city)),
      street: text(book.places.map(({ street }) => spelling.of(street ?? ''))),
      ...columns(book.places.map(({ at }) => at)),
    },
    strings: strings.strings,
  };
}

function columns(places: readonly LonLat[]): { lon: Int32Array; lat: Int32Array } {
  return {
    lon: Int32Array.from(places, ([lon]) => packed(lon)),
    lat: Int32Array.from(places, ([, lat]) => packed(lat)),
  };
}

/** Where each group begins, and where the last one ends. */
function starts(sizes: readonly number[]): Uint32Array {
  const found = new Uint32Array(sizes.length + 1);
  sizes.forEach((size, i) => (found[i + 1] = found[i]! + size));
  return found;
}

const compare = (a: string, b: string): number => (a < b ? -1 : a > b ? 1 : 0);

function gatherStreets(book: AddressBook, spelling: Spellings): Street[] {
  const streets = new Map<string, Street>();
  const streetOf = (spelled: string, city: string, at: LonLat): Street => {
    const name = spelling.of(spelled);
    const key = `${name}|${city.toLowerCase()}`;
    const known = streets.get(key);
    if (known) return known;
    const street = { name, city, at, houses: [], ranges: [] };
    streets.set(key, street);
    return street;
  };
  for (const { name, city, at } of book.streets) streetOf(name, city, at);
  for (const point of book.addresses)
    streetOf(point.street, point.city, point.at).houses.push(point);
  for (const range of book.ranges ?? [])
    streetOf(range.street, range.city, range.line[0]!).ranges.push(range);
  const sorted = [...streets.values()].sort(
    (a, b) => compare(a.name, b.name) || compare(a.city, b.city),
  );
  for (const { houses } of sorted) sortHouses(houses);
  return sorted;
}

/** By their numbers; what has no figure in it comes last. */
function sortHouses(houses: AddressPoint[]): void {
  const order = new Map(
    houses.map((house) => [house, houseNumberOrder(house.number) ?? Infinity] as const),
  );
  houses.sort((a, b) => {
    const [left, right] = [order.get(a)!, order.get(b)!];
    return left === right ? compare(a.number, b.number) : left - right;
  });
}

/** A corner is written down once, however many arms it has. */
function sortedCorners(book: AddressBook, spelling: Spellings): AddressBook['corners'][number][] {
  return book.corners
    .map(({ first, second, city, at }) => {
      const names = [spelling.of(first), spelling.of(second)].sort(compare) as [string, string];
      return { first: names[0], second: names[1], city, at };
    })
    .filter(({ first, second }) => first !== second)
    .sort((a, b) => compare(a.first, b.first) || compare(a.second, b.second));
}

/** The first spelling of each street's name stands for all of them. */
class Spellings {
  private readonly byWords = new Map<string, string>();
  private readonly known = new Map<string, string>();

  of(name: string): string {
    const found = this.known.get(name);
    if (found !== undefined) return found;
    const words = wordsOf(name).join(' ');
    const spelled = this.byWords.get(words) ?? name;
    this.byWords.set(words, spelled);
    this.known.set(name, spelled);
    return spelled;
  }
}
