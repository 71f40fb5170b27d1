import {
  canonicalNumber,
  houseNumberOrder,
  isEvenNumber,
} from '@shared/domain/address/house-number';
import { tokensOf } from '@shared/domain/address/parse-address';
import { canonical, wordsOfStreet, type StreetWords } from '@shared/domain/address/street-words';
import type { AddressBook, AddressPoint } from './address-points';
import type { LonLat } from './osm-extract';

/** One street of one city with its houses in the order of their numbers. */
export interface StreetEntry {
  readonly name: string;
  readonly city: string;
  readonly words: StreetWords;
  readonly cityWords: readonly string[];
  readonly at: LonLat;
  readonly houses: readonly House[];
  /** Houses by every spelling of their number. */
  readonly byNumber: ReadonlyMap<string, AddressPoint>;
}

interface House {
  readonly order: number;
  readonly point: AddressPoint;
}

export const wordsOf = (text: string): string[] => tokensOf(text).map(canonical);

/** Groups a region's addresses and named roads by street and city; spellings of one street become one. */
export function streetEntries(book: AddressBook): StreetEntry[] {
  const drafts = new Map<
    string,
    { name: string; city: string; at: LonLat; points: AddressPoint[] }
  >();
  const draftOf = (name: string, city: string, at: LonLat): { points: AddressPoint[] } => {
    const key = `${wordsOf(name).join(' ')}|${city.toLowerCase()}`;
    const known = drafts.get(key);
    if (known) return known;
    const draft = { name, city, at, points: [] };
    drafts.set(key, draft);
    return draft;
  };
  for (const { name, city, at } of book.streets) draftOf(name, city, at);
  for (const point of book.addresses)
    draftOf(point.street, point.city, point.at).points.push(point);
  return [...drafts.values()].map(({ name, city, at, points }) => {
    const houses = points
      .flatMap((point): House[] => {
        const order = houseNumberOrder(point.number);
        return order === null ? [] : [{ order, point }];
      })
      .sort((a, b) => a.order - b.order);
    const byNumber = new Map<string, AddressPoint>();
    // Exact spellings first: "21809" written without its hyphen must not hide a real 21809.
    for (const point of points)
      if (!byNumber.has(canonicalNumber(point.number)))
        byNumber.set(canonicalNumber(point.number), point);
    for (const point of points) {
      const bare = point.number.toLowerCase().replace(/\D+/g, '');
      if (point.number.includes('-') && !byNumber.has(bare)) byNumber.set(bare, point);
    }
    return {
      name,
      city,
      words: wordsOfStreet(wordsOf(name)),
      cityWords: wordsOf(city),
      at,
      houses,
      byNumber,
    };
  });
}

export interface NumberMatch {
  readonly kind: 'rooftop' | 'interpolated' | 'street';
  readonly at: LonLat;
  readonly postcode: string;
}

/** Farther apart than this two neighbours say nothing about what lies between them. Our estimate. */
const WIDEST_GAP = 100;

/** Where a number lies on a street: at its own point, between neighbours of its side, or somewhere. */
export function matchNumber(entry: StreetEntry, number: string): NumberMatch {
  const exact = entry.byNumber.get(canonicalNumber(number));
  if (exact) return { kind: 'rooftop', at: exact.at, postcode: exact.postcode };
  const order = houseNumberOrder(number);
  if (order === null || entry.houses.length === 0)
    return { kind: 'street', at: entry.at, postcode: '' };
  const isEven = isEvenNumber(order);
  let low = 0;
  let high = entry.houses.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (entry.houses[middle]!.order < order) low = middle + 1;
    else high = middle;
  }
  const sameSide = (from: number, step: 1 | -1): House | null => {
    for (let i = from; i >= 0 && i < entry.houses.length; i += step) {
      const house = entry.houses[i]!;
      if (isEvenNumber(house.order) === isEven) return house;
    }
    return null;
  };
  const below = sameSide(low - 1, -1);
  const above = sameSide(low, 1);
  if (below && above && above.order - below.order <= WIDEST_GAP) {
    const share = (order - below.order) / (above.order - below.order || 1);
    const at = (i: 0 | 1): number =>
      below.point.at[i] + (above.point.at[i] - below.point.at[i]) * share;
    const postcode = below.point.postcode === above.point.postcode ? below.point.postcode : '';
    return { kind: 'interpolated', at: [at(0), at(1)], postcode };
  }
  const nearest = [below, above]
    .flatMap((house) => (house ? [house] : []))
    .sort((a, b) => Math.abs(a.order - order) - Math.abs(b.order - order))[0];
  return {
    kind: 'street',
    at: nearest?.point.at ?? entry.at,
    postcode: nearest?.point.postcode ?? '',
  };
}
