import {
  canonicalNumber,
  houseNumberOrder,
  hyphenatedForms,
  isEvenNumber,
} from '@shared/domain/address/house-number';
import { lonLatAt, type AddressTable } from './address-table';
import { placeAlong } from './along-line';
import type { LonLat } from './osm-extract';

export interface NumberMatch {
  readonly kind: 'rooftop' | 'interpolated' | 'street';
  /** As the book writes it, where it knows the house. */
  readonly number: string;
  readonly at: LonLat;
  readonly postcode: string;
}

/** Farther apart than this two neighbours say nothing about what lies between them. Our estimate. */
const WIDEST_GAP = 100;

/** A number that is looked for on many streets; worked out once. */
export interface WantedNumber {
  readonly text: string;
  readonly canonical: string;
  readonly order: number | null;
  /** With the hyphen that may have been left out. */
  readonly hyphenated: readonly { readonly canonical: string; readonly order: number }[];
}

export function wantedNumber(text: string): WantedNumber {
  return {
    text,
    canonical: canonicalNumber(text),
    order: houseNumberOrder(text),
    hyphenated: hyphenatedForms(text).map((form) => ({
      canonical: canonicalNumber(form),
      order: houseNumberOrder(form) ?? NaN,
    })),
  };
}

/** Finds house numbers on the streets of a table, by halving. */
export class StreetBook {
  /** By the number's text; worked out once for each text that is a house number. */
  private readonly orders: Float64Array;
  private readonly canonicals: string[] = [];

  constructor(private readonly table: AddressTable) {
    this.orders = new Float64Array(table.strings.length).fill(-1);
    for (const number of table.houses.number) {
      if (this.orders[number] !== -1) continue;
      const text = table.strings[number]!;
      this.orders[number] = houseNumberOrder(text) ?? Infinity;
      this.canonicals[number] = canonicalNumber(text);
    }
  }

  /**
   * Where a number lies on a street: at its own point, or points where the data has two such houses;
   * else between others of its side, or somewhere on the street.
   */
  find(street: number, wanted: WantedNumber): NumberMatch[] {
    const { houses } = this.table;
    const exact = this.housesWith(street, wanted);
    if (exact.length > 0)
      return exact.map((house) => ({
        kind: 'rooftop',
        number: this.text(houses.number, house),
        at: lonLatAt(houses, house),
        postcode: this.text(houses.postcode, house),
      }));
    const { order, text } = wanted;
    const place =
      order === null
        ? this.somewhere(street)
        : (this.between(street, order) ?? this.near(street, order));
    return [{ ...place, number: text }];
  }

  /** A place on the street, when no number is said. */
  somewhere(street: number): Omit<NumberMatch, 'number'> {
    return { kind: 'street', at: lonLatAt(this.table.streets, street), postcode: '' };
  }

  private housesWith(street: number, { canonical, order, hyphenated }: WantedNumber): number[] {
    const found = order === null ? [] : this.housesAt(street, canonical, order);
    // Exact spellings first: "21809" written without its hyphen must not hide a real 21809.
    for (const form of found.length === 0 ? hyphenated : [])
      found.push(...this.housesAt(street, form.canonical, form.order));
    return found;
  }

  private housesAt(street: number, canonical: string, order: number): number[] {
    const found: number[] = [];
    const end = this.table.streets.houses[street + 1]!;
    for (let i = this.firstFrom(street, order); i < end && this.orderOf(i) === order; i++)
      if (this.canonicals[this.table.houses.number[i]!] === canonical) found.push(i);
    return found;
  }

  /** The first house of a street whose number is not below this. */
  private firstFrom(street: number, order: number): number {
    const { houses } = this.table.streets;
    let low = houses[street]!;
    let high = houses[street + 1]!;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (this.orderOf(middle) < order) low = middle + 1;
      else high = middle;
    }
    return low;
  }

  private orderOf(house: number): number {
    return this.orders[this.table.houses.number[house]!]!;
  }

  /** Neighbours of the same side on both sides of a number. */
  private neighbours(
    street: number,
    order: number,
  ): { below: number | null; above: number | null } {
    const isEven = isEvenNumber(order);
    const from = this.firstFrom(street, order);
    const isSameSide = (house: number): boolean =>
      Number.isFinite(this.orderOf(house)) && isEvenNumber(this.orderOf(house)) === isEven;
    const { houses } = this.table.streets;
    let below = from - 1;
    while (below >= houses[street]! && !isSameSide(below)) below--;
    let above = from;
    while (above < houses[street + 1]! && !isSameSide(above)) above++;
    return {
      below: below < houses[street]! ? null : below,
      above: above >= houses[street + 1]! ? null : above,
    };
  }

  private between(street: number, order: number): Omit<NumberMatch, 'number'> | null {
    const { below, above } = this.neighbours(street, order);
    const gap =
      below === null || above === null ? Infinity : this.orderOf(above) - this.orderOf(below);
    const range = this.rangeOf(street, order);
    // A drawn line follows the street's bends, unless houses inside it are known by now.
    if (range && range.to - range.from <= gap) return this.inRange(range, order);
    if (below === null || above === null || gap > WIDEST_GAP) return null;
    const { houses } = this.table;
    const share = (order - this.orderOf(below)) / (gap || 1);
    const postcode = this.text(houses.postcode, below);
    return {
      kind: 'interpolated',
      at: placeAlong([lonLatAt(houses, below), lonLatAt(houses, above)], share),
      postcode: postcode === this.text(houses.postcode, above) ? postcode : '',
    };
  }

  private rangeOf(
    street: number,
    order: number,
  ): { range: number; from: number; to: number } | null {
    const { streets, ranges, strings } = this.table;
    for (let range = streets.ranges[street]!; range < streets.ranges[street + 1]!; range++) {
      const from = houseNumberOrder(strings[ranges.from[range]!]!) ?? Infinity;
      const to = houseNumberOrder(strings[ranges.to[range]!]!) ?? -Infinity;
      const isSameSide = ranges.step[range] === 1 || isEvenNumber(from) === isEvenNumber(order);
      if (from <= order && order <= to && isSameSide) return { range, from, to };
    }
    return null;
  }

  private inRange(
    { range, from, to }: { range: number; from: number; to: number },
    order: number,
  ): Omit<NumberMatch, 'number'> {
    const { ranges, rangePoints } = this.table;
    const line: LonLat[] = [];
    for (let p = ranges.points[range]!; p < ranges.points[range + 1]!; p++)
      line.push(lonLatAt(rangePoints, p));
    return {
      // The numbers at the ends were seen by whoever drew the line.
      kind: order === from || order === to ? 'rooftop' : 'interpolated',
      at: placeAlong(line, (order - from) / (to - from)),
      postcode: this.text(ranges.postcode, range),
    };
  }

  /** The nearest number's place stands for a number that the street does not have. */
  private near(street: number, order: number): Omit<NumberMatch, 'number'> {
    const { below, above } = this.neighbours(street, order);
    const off = (house: number | null): number =>
      house === null ? Infinity : Math.abs(this.orderOf(house) - order);
    const house = off(below) <= off(above) ? below : above;
    if (house === null) return this.somewhere(street);
    const { houses } = this.table;
    return {
      kind: 'street',
      at: lonLatAt(houses, house),
      postcode: this.text(houses.postcode, house),
    };
  }

  private text(numbers: Uint32Array, i: number): string {
    return this.table.strings[numbers[i]!] ?? '';
  }
}
