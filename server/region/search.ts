import type { AddressKind } from '@shared/domain/address/address-suggestion';
import {
  fitCity,
  type CityFit,
  type Fit,
  type Query,
  type StreetFit,
} from '@shared/domain/address/street-score';
import type { ParsedAddress } from '@shared/domain/address/parse-address';
import { WordCosts, type WordCost } from '@shared/domain/address/word-cost';
import type { CityNames } from './city-names';
import type { LonLat } from './osm-extract';
import type { NameFit, StreetNames } from './street-names';

/** What an answer says, in a person's form. */
export interface Wording {
  readonly number: string | null;
  readonly street: string;
  readonly city: string;
  readonly postcode: string;
}

/** One possible meaning of the words, put into a person's form only when it is shown. */
export interface Reading extends Fit {
  /** The cost with what only orders the list: how well the number is known, and the doubt of the reading. */
  readonly rank: number;
  readonly kind: AddressKind;
  readonly at: LonLat;
  readonly unit: string | null;
  /** A town or a postcode was said, or there is one town only. */
  readonly isPlaced: boolean;
  word(): Wording;
}

/** One question: what is worked out for one way to read the words is kept for the others. */
export class Search {
  private readonly streetFits = new Map<string, readonly NameFit[]>();
  private readonly cityFits = new Map<string, Map<number, CityFit>>();
  private readonly cityWords = new Map<string, boolean>();
  private readonly words: WordCosts;

  constructor(
    private readonly streets: StreetNames,
    private readonly cities: CityNames,
    sounds: ReadonlyMap<string, string>,
    readonly isTyping: boolean,
  ) {
    this.words = new WordCosts(sounds);
  }

  /** Whether an answer's town is sure by what was said, or because there is no other. */
  isPlaced(city: CityFit): boolean {
    return city.isNamed || this.cities.isAlone;
  }

  get wordCost(): WordCost {
    return this.words.of;
  }

  /** The ways to read a text, with towns that stand without a comma taken out of the street; likeliest first. */
  waysOf(ways: readonly ParsedAddress[]): ParsedAddress[] {
    return ways
      .flatMap((way) => [
        way,
        ...this.cities.splitOff(way, (word, isLast) =>
          this.namesCity(word, isLast && this.isTyping && way.tail.length === 0),
        ),
      ])
      .sort((a, b) => a.doubt - b.doubt);
  }

  queryOf(street: readonly string[], tail: readonly string[]): Query {
    return {
      street,
      tail,
      isTyping: this.isTyping,
      namesACity: tail.some((word, i) =>
        this.namesCity(word, this.isTyping && i === tail.length - 1),
      ),
      isKnown: (word) => this.streets.isKnown(word),
      wordCost: this.wordCost,
    };
  }

  similarStreets(query: Query): readonly NameFit[] {
    const key = `${query.street.join(' ')}|${String(query.tail.length > 0)}`;
    const known = this.streetFits.get(key);
    if (known) return known;
    const found = this.streets.similar(query);
    this.streetFits.set(key, found);
    return found;
  }

  /** How well the words that the street left name a town, by its number in the table. */
  cityFit(query: Query, left: StreetFit['left'], city: number): CityFit {
    const key = `${left.map(({ said }) => said).join(' ')}|${query.tail.join(' ')}`;
    let fits = this.cityFits.get(key);
    if (!fits) this.cityFits.set(key, (fits = new Map<number, CityFit>()));
    const known = fits.get(city);
    if (known) return known;
    const fit = fitCity(query, left, this.cities.wordsOf(city));
    fits.set(city, fit);
    return fit;
  }

  private namesCity(word: string, mayBePrefix: boolean): boolean {
    const key = `${word}${mayBePrefix ? '…' : ''}`;
    const known = this.cityWords.get(key);
    if (known !== undefined) return known;
    const found = this.cities.names(word, mayBePrefix, this.wordCost);
    this.cityWords.set(key, found);
    return found;
  }
}
