import { setImmediate } from 'node:timers/promises';
import type { TownDto } from '@shared/contract/areas';
import type { AddressSuggestion } from '@shared/domain/address/address-suggestion';
import { confidenceOf, tooClose } from '@shared/domain/address/confidence';
import { waysToRead } from '@shared/domain/address/parse-address';
import { soundKey } from '@shared/domain/address/sounds-alike';
import { longType } from '@shared/domain/address/street-words';
import type { AddressBook } from './address-points';
import { readAddressTable } from './address-store';
import type { AddressTable } from './address-table';
import { CityNames } from './city-names';
import { CornerSearch } from './corner-search';
import { HouseSearch } from './house-search';
import { NearestAddress } from './nearest-address';
import { metresBetween, type Nearness } from './nearness';
import type { LonLat } from './osm-extract';
import { packAddressBook } from './pack-addresses';
import { PlaceSearch } from './place-search';
import { Search, type Reading, type Wording } from './search';
import { StreetBook } from './street-book';
import { DEAREST, StreetNames } from './street-names';
import { townsOf } from './towns';

export interface SuggestOptions {
  /** Where callers are expected: comes first among equals. */
  readonly near?: Nearness | null;
  readonly limit?: number;
}

/** More ways to read one line are too far-fetched to be looked up. */
const MOST_WAYS = 12;
/** A way so much more far-fetched than an answer that was found needs no look-up. */
const FAR_FETCHED = 0.1;
/** An answer a county away comes so much later: less than any word that fits better. */
const FARTHEST = 0.09;
const OUTSIDE = 0.03;
const FAR_METRES = 20_000;
/** Nearer to each other two points are the same door. */
const SAME_PLACE_METRES = 40;
/** So many answers are looked at for others that are as good. */
const RIVALS = 40;

/** What is made of a region's table, each once. */
interface Parts {
  readonly streets: StreetNames;
  readonly cityNames: CityNames;
  readonly corners: CornerSearch;
  readonly houses: HouseSearch;
  readonly places: PlaceSearch;
  /** How each word of the region's names sounds. */
  readonly sounds: ReadonlyMap<string, string>;
}

/** One part after the other: with a whole state's streets all of them would hold up a server for long. */
function* makeParts(table: AddressTable): Generator<void, Parts> {
  const streets = new StreetNames(table);
  yield;
  const cityNames = new CityNames(table);
  yield;
  const corners = new CornerSearch(table);
  yield;
  const book = new StreetBook(table);
  yield;
  const houses = new HouseSearch(table, book, corners);
  yield;
  const places = new PlaceSearch(table);
  yield;
  const words = [...streets.words, ...cityNames.distinct, ...places.words];
  const sounds = new Map(words.map(longType).map((word) => [word, soundKey(word)]));
  return { streets, cityNames, corners, houses, places, sounds };
}

/** Finds addresses of one region by what people say, type and misspell. Kept in memory. */
export class AddressIndex {
  private readonly points: NearestAddress;
  private readonly squeeze: number;

  private constructor(
    private readonly table: AddressTable,
    private readonly parts: Parts,
  ) {
    this.points = new NearestAddress(table);
    this.squeeze = Math.cos((((table.streets.lat[0] ?? 0) / 1e7) * Math.PI) / 180);
  }

  static of(book: AddressBook): AddressIndex {
    const table = packAddressBook(book);
    const making = makeParts(table);
    for (let step = making.next(); ; step = making.next())
      if (step.done) return new AddressIndex(table, step.value);
  }

  /** Reads a region's folder, as the importer left it. What else there is to do is done in between. */
  static async open(folder: string): Promise<AddressIndex> {
    const table = await readAddressTable(folder);
    const making = makeParts(table);
    for (let step = making.next(); ; step = making.next()) {
      if (step.done) return new AddressIndex(table, step.value);
      await setImmediate();
    }
  }

  /** Names of the towns that have houses. */
  get cities(): string[] {
    return this.parts.cityNames.withHouses;
  }

  get towns(): TownDto[] {
    return townsOf(this.table);
  }

  /** What the words typed so far may mean, best first. */
  suggest(text: string, { near = null, limit = 8 }: SuggestOptions = {}): AddressSuggestion[] {
    return this.answers(this.readings(text, true), near, limit);
  }

  /**
   * The best single reading of a complete address, for imports. Take it without a person's look
   * only from ACCEPT_CONFIDENCE on; null when nothing is like it.
   */
  locate(text: string): AddressSuggestion | null {
    return this.answers(this.readings(text, false), null, 1)[0] ?? null;
  }

  /** Names a point that was set by hand; the point itself stays as given. */
  nearest(lon: number, lat: number): AddressSuggestion {
    return this.points.at(lon, lat);
  }

  private readings(text: string, isTyping: boolean): Reading[] {
    const search = new Search(
      this.parts.streets,
      this.parts.cityNames,
      this.parts.sounds,
      isTyping,
    );
    const ways = waysToRead(text).filter(({ street }) => street.length > 0);
    const found: Reading[] = [];
    let best = Infinity;
    for (const way of search.waysOf(ways).slice(0, MOST_WAYS)) {
      if (way.doubt > best + FAR_FETCHED) break;
      const readings = [
        ...(way.cross && way.number === null ? [] : this.parts.houses.readings(search, way)),
        ...this.parts.corners.readings(search, way),
      ];
      for (const reading of readings) {
        if (reading.rank < best) best = reading.rank;
        found.push(reading);
      }
    }
    for (const way of ways) found.push(...this.parts.places.readings(search, way));
    return found;
  }

  /** The first answers in the order of their ranks, near ones before equals. */
  private answers(readings: Reading[], near: Nearness | null, limit: number): AddressSuggestion[] {
    const ordered = readings.filter(({ cost }) => cost <= DEAREST).sort((a, b) => a.rank - b.rank);
    // Farther down none can come up by being near.
    const reach = (ordered[limit * 2]?.rank ?? Infinity) + FARTHEST;
    const placed = ordered
      .filter(({ rank }, i) => i <= limit * 2 || rank <= reach)
      .map((reading) => ({ reading, order: reading.rank + awayCost(near, reading.at) }))
      .sort((a, b) => a.order - b.order);
    const rivals = ordered.slice(0, RIVALS);
    const shown = new Map<string, AddressSuggestion>();
    for (const { reading } of placed) {
      if (shown.size === limit) break;
      const wording = reading.word();
      const label = lineOf(wording);
      if (!shown.has(label)) shown.set(label, this.suggestion(reading, wording, label, rivals));
    }
    return [...shown.values()];
  }

  private suggestion(
    { kind, at, unit, cost, rank, isPlaced, isAgainst }: Reading,
    wording: Wording,
    label: string,
    rivals: readonly Reading[],
  ): AddressSuggestion {
    // Those that differ little in rank and lie apart lower each other's confidence.
    const isDisputed = rivals.some(
      (other) => other.rank - rank < tooClose(kind, isPlaced) && this.isApart(other.at, at),
    );
    return {
      ...wording,
      label,
      unit,
      lon: at[0],
      lat: at[1],
      kind,
      confidence: confidenceOf({ kind, cost, isPlaced, isAgainst, isDisputed }),
    };
  }

  private isApart(a: LonLat, b: LonLat): boolean {
    return metresBetween(a, b, this.squeeze) > SAME_PLACE_METRES;
  }
}

function awayCost(near: Nearness | null, at: LonLat): number {
  const metres = near?.metresTo(at) ?? 0;
  if (metres === 0) return 0;
  return OUTSIDE + (FARTHEST - OUTSIDE) * Math.min(1, metres / FAR_METRES);
}

/** "1210 N Heron St, Pell Harbor 00010"; the apartment is the call's, not the point's. */
export function lineOf({ number, street, city, postcode }: Wording): string {
  const first = [number, street].filter((part) => part).join(' ');
  const town = [city === street ? '' : city, postcode].filter((part) => part).join(' ');
  return [first, town].filter((part) => part).join(', ');
}
