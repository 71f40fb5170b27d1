import Flatbush from 'flatbush';
import type { AddressKind, AddressSuggestion } from '@shared/domain/address/address-suggestion';
import { NameGrams } from '@shared/domain/address/name-grams';
import { parseAddress, type ParsedAddress } from '@shared/domain/address/parse-address';
import { namesCost, streetCost, wordCost, type Query } from '@shared/domain/address/street-score';
import { isDirection, isType, postalStreet } from '@shared/domain/address/street-words';
import type { AddressBook, PlaceName, StreetCorner } from './address-points';
import type { LonLat } from './osm-extract';
import { readAddressBook } from './region-data';
import { matchNumber, streetEntries, wordsOf, type StreetEntry } from './street-book';

export interface SuggestOptions {
  /** Places near here come first among equals. */
  readonly near?: LonLat;
  readonly limit?: number;
}

/** A reading of the words, before it is put into a person's form. */
interface Reading {
  readonly cost: number;
  /** Cost with what only orders the list: distance, and how well the number is known. */
  readonly rank: number;
  readonly suggestion: Omit<AddressSuggestion, 'confidence'>;
}

/** How far a kind of match can be trusted when the words fit exactly. Our estimate. */
const TRUST: Readonly<Record<AddressKind, number>> = {
  rooftop: 1,
  interpolated: 0.88,
  corner: 0.9,
  street: 0.5,
  place: 0.6,
  pin: 1,
};
const CANDIDATES = 40;
/** A dearer reading is not shown at all. */
const DEAREST = 1.25;
/** Two readings this close in cost are a question for a person. */
const TOO_CLOSE = 0.3;
/** Nearer to each other two points are the same door. */
const SAME_PLACE_METRES = 40;
const HOUSE_METRES = 60;
const NEARBY_METRES = 400;
const METRES_PER_DEGREE = 111_195;

/** Finds addresses of one region by what people say, type and misspell. Kept in memory. */
export class AddressIndex {
  private readonly entries: readonly StreetEntry[];
  private readonly byName: StreetEntry[][] = [];
  private readonly names: NameGrams;
  private readonly placeNames: NameGrams;
  private readonly placeWords: readonly (readonly string[])[];
  private readonly cityWords: readonly string[];
  private readonly corners = new Map<string, StreetCorner[]>();
  private readonly points: Flatbush | null;
  private readonly squeeze: number;

  constructor(private readonly book: AddressBook) {
    this.entries = streetEntries(book);
    const numbers = new Map<string, number>();
    for (const entry of this.entries) {
      const key = entry.words.names.join(' ');
      const known = numbers.get(key);
      if (known === undefined) {
        numbers.set(key, this.byName.length);
        this.byName.push([entry]);
      } else this.byName[known]!.push(entry);
    }
    this.names = new NameGrams(this.byName.map(([first]) => first!.words.names));
    this.placeWords = book.places.map(({ name }) => wordsOf(name));
    this.placeNames = new NameGrams(this.placeWords);
    this.cityWords = [...new Set(this.entries.flatMap((entry) => entry.cityWords))];
    for (const corner of book.corners) {
      const key = cornerKey(corner.first, corner.second);
      const known = this.corners.get(key);
      if (known) known.push(corner);
      else this.corners.set(key, [corner]);
    }
    this.squeeze = Math.cos(((book.addresses[0]?.at[1] ?? 0) * Math.PI) / 180);
    this.points = this.indexPoints();
  }

  /** Reads a region's folder, as the importer left it. */
  static async open(folder: string): Promise<AddressIndex> {
    return new AddressIndex(await readAddressBook(folder));
  }

  /** What the words typed so far may mean, best first. */
  suggest(text: string, { near, limit = 8 }: SuggestOptions = {}): AddressSuggestion[] {
    return withConfidence(this.readings(text, true, near), limit);
  }

  /**
   * The best single reading of a complete address, for imports. Take it without a person's look
   * only from ACCEPT_CONFIDENCE on; null when nothing is like it.
   */
  locate(text: string, near?: LonLat): AddressSuggestion | null {
    return withConfidence(this.readings(text, false, near), 1)[0] ?? null;
  }

  /** Names a point that was set by hand; the point itself stays as given. */
  nearest(lon: number, lat: number): AddressSuggestion {
    const found = this.points?.neighbors(
      lon * this.squeeze,
      lat,
      1,
      NEARBY_METRES / METRES_PER_DEGREE,
    )[0];
    const point = found === undefined ? undefined : this.book.addresses[found];
    const pin = { unit: null, lon, lat, kind: 'pin', confidence: 1 } as const;
    if (!point) {
      return {
        ...pin,
        label: `Pin at ${lat.toFixed(5)}, ${lon.toFixed(5)}`,
        number: null,
        street: '',
        city: '',
        postcode: '',
      };
    }
    const isHouse = this.metres([lon, lat], point.at) <= HOUSE_METRES;
    const line = lineOf(point.number, point.street, null, point.city, point.postcode);
    return {
      ...pin,
      label: isHouse ? line : `Pin near ${line}`,
      number: isHouse ? point.number : null,
      street: postalStreet(point.street),
      city: point.city,
      postcode: point.postcode,
    };
  }

  private readings(text: string, isTyping: boolean, near: LonLat | undefined): Reading[] {
    const readings = variants(parseAddress(text)).flatMap((parsed) =>
      this.readingsOf(parsed, isTyping, near),
    );
    readings.sort((a, b) => a.rank - b.rank || (a.suggestion.label < b.suggestion.label ? -1 : 1));
    const seen = new Set<string>();
    return readings.filter(({ cost, suggestion: { label } }) => {
      if (cost > DEAREST || seen.has(label)) return false;
      seen.add(label);
      return true;
    });
  }

  private readingsOf(
    parsed: ParsedAddress,
    isTyping: boolean,
    near: LonLat | undefined,
  ): Reading[] {
    if (parsed.isPostBox || parsed.street.length === 0) return [];
    const query = this.queryOf(parsed.street, parsed, isTyping);
    const away = (at: LonLat): number =>
      near ? Math.min(0.1, this.metres(near, at) / 500_000) : 0;
    if (parsed.cross)
      return this.cornerReadings(query, this.queryOf(parsed.cross, parsed, isTyping), away);
    const streets = this.similarStreets(query).map(({ entry, cost }) =>
      this.streetReading(entry, cost, parsed, away),
    );
    return parsed.number === null ? [...streets, ...this.placeReadings(query, away)] : streets;
  }

  private queryOf(street: readonly string[], { tail }: ParsedAddress, isTyping: boolean): Query {
    const namesACity = tail.some((word) =>
      this.cityWords.some((city) => {
        const cost = wordCost(word, city, isTyping);
        return cost !== null && cost < 0.5;
      }),
    );
    return { street, tail, isTyping, namesACity };
  }

  private similarStreets(query: Query): { entry: StreetEntry; cost: number }[] {
    const telling = query.street.filter((word) => !isType(word) && !isDirection(word));
    const words = telling.length > 0 ? telling : query.street;
    // Two words may be one name that was typed apart.
    const glued = words.slice(1).map((word, i) => words[i]! + word);
    const found: { entry: StreetEntry; cost: number }[] = [];
    for (const number of this.names.similar([...words, ...glued], CANDIDATES)) {
      const entries = this.byName[number]!;
      // Streets of one name share the dear part of the work, and most names fail at it.
      if (namesCost(query, entries[0]!.words.names) > DEAREST) continue;
      for (const entry of entries) {
        const cost = streetCost(query, { words: entry.words, city: entry.cityWords });
        if (cost <= DEAREST) found.push({ entry, cost });
      }
    }
    return found;
  }

  private streetReading(
    entry: StreetEntry,
    wordsCost: number,
    parsed: ParsedAddress,
    away: (at: LonLat) => number,
  ): Reading {
    const { number, unit } = parsed;
    const match =
      number === null
        ? { kind: 'street' as const, at: entry.at, postcode: '' }
        : matchNumber(entry, number);
    // A wrong postcode is a weak sign: callers know their street better.
    const cost =
      wordsCost +
      (parsed.postcode && match.postcode && match.postcode !== parsed.postcode ? 0.25 : 0);
    const unknown =
      number === null
        ? 0
        : match.kind === 'rooftop'
          ? 0
          : match.kind === 'interpolated'
            ? 0.1
            : 0.35;
    return {
      cost,
      rank: cost + unknown + away(match.at),
      suggestion: {
        label: lineOf(number, entry.name, unit, entry.city, match.postcode),
        number,
        street: postalStreet(entry.name),
        unit,
        city: entry.city,
        postcode: match.postcode,
        lon: match.at[0],
        lat: match.at[1],
        kind: match.kind,
      },
    };
  }

  private cornerReadings(first: Query, second: Query, away: (at: LonLat) => number): Reading[] {
    const cheapest = (query: Query): { name: string; cost: number }[] => {
      const costs = new Map<string, number>();
      // The city is judged at the corner itself, once.
      for (const { entry } of this.similarStreets({ ...query, tail: [], namesACity: false })) {
        const cost = streetCost(
          { ...query, tail: [], namesACity: false },
          { words: entry.words, city: entry.cityWords },
        );
        costs.set(entry.name, Math.min(cost, costs.get(entry.name) ?? Infinity));
      }
      return [...costs].map(([name, cost]) => ({ name, cost })).sort((a, b) => a.cost - b.cost);
    };
    const others = cheapest(second);
    const readings: Reading[] = [];
    for (const one of cheapest(first)) {
      for (const other of others) {
        for (const corner of this.corners.get(cornerKey(one.name, other.name)) ?? []) {
          const inCity = streetCost(
            { ...first, street: [] },
            { words: { names: [], types: [], directions: [] }, city: wordsOf(corner.city) },
          );
          const cost = one.cost + other.cost + inCity;
          const street = `${postalStreet(one.name)} & ${postalStreet(other.name)}`;
          readings.push({
            cost,
            rank: cost + away(corner.at),
            suggestion: {
              label: lineOf(null, street, null, corner.city, ''),
              number: null,
              street,
              unit: null,
              city: corner.city,
              postcode: '',
              lon: corner.at[0],
              lat: corner.at[1],
              kind: 'corner',
            },
          });
        }
      }
    }
    return readings;
  }

  private placeReadings(query: Query, away: (at: LonLat) => number): Reading[] {
    return this.placeNames.similar(query.street, 12).flatMap((number): Reading[] => {
      const place = this.book.places[number] as PlaceName;
      const words = { names: this.placeWords[number]!, types: [], directions: [] };
      const cost = 0.1 + streetCost(query, { words, city: wordsOf(place.city) });
      if (cost > DEAREST) return [];
      const suggestion = {
        label: place.city ? `${place.name}, ${place.city}` : place.name,
        number: null,
        street: place.name,
        unit: null,
        city: place.city || place.name,
        postcode: '',
        lon: place.at[0],
        lat: place.at[1],
        kind: 'place' as const,
      };
      return [{ cost, rank: cost + away(place.at), suggestion }];
    });
  }

  private indexPoints(): Flatbush | null {
    const { addresses } = this.book;
    if (addresses.length === 0) return null;
    const index = new Flatbush(addresses.length);
    for (const { at } of addresses) index.add(at[0] * this.squeeze, at[1]);
    index.finish();
    return index;
  }

  private metres(a: LonLat, b: LonLat): number {
    const dx = (a[0] - b[0]) * this.squeeze;
    const dy = a[1] - b[1];
    return Math.sqrt(dx * dx + dy * dy) * METRES_PER_DEGREE;
  }
}

/** "1210n heron" may be house 1210N, or 1210 on North Heron. */
function variants(parsed: ParsedAddress): ParsedAddress[] {
  const glued = /^(\d+)([nsew])$/.exec(parsed.number ?? '');
  return glued
    ? [parsed, { ...parsed, number: glued[1]!, street: [glued[2]!, ...parsed.street] }]
    : [parsed];
}

/** The first readings; those that differ little in rank and lie apart lower each other's confidence. */
function withConfidence(readings: readonly Reading[], limit: number): AddressSuggestion[] {
  return readings.slice(0, limit).map(({ cost, rank, suggestion }) => {
    const isDisputed = readings.some(
      (other) =>
        other.rank - rank < TOO_CLOSE &&
        other.suggestion !== suggestion &&
        isApart(other.suggestion, suggestion),
    );
    const confidence =
      TRUST[suggestion.kind] * Math.max(0, 1 - 0.4 * cost) * (isDisputed ? 0.6 : 1);
    return { ...suggestion, confidence: Math.round(confidence * 100) / 100 };
  });
}

function isApart(a: { lon: number; lat: number }, b: { lon: number; lat: number }): boolean {
  return Math.abs(a.lon - b.lon) + Math.abs(a.lat - b.lat) > SAME_PLACE_METRES / METRES_PER_DEGREE;
}

const cornerKey = (a: string, b: string): string => (a < b ? `${a}|${b}` : `${b}|${a}`);

function lineOf(
  number: string | null,
  street: string,
  unit: string | null,
  city: string,
  postcode: string,
): string {
  const first = [number, postalStreet(street), unit].filter((part) => part).join(' ');
  return [first, [city, postcode].filter((part) => part).join(' ')]
    .filter((part) => part)
    .join(', ');
}
