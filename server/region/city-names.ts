import { canonicalCityWord, cityWordCost } from '@shared/domain/address/city-cost';
import type { ParsedAddress } from '@shared/domain/address/parse-address';
import type { WordCost } from '@shared/domain/address/word-cost';
import { wordsOf, type AddressTable } from './address-table';

/** A word this cheap is meant as a town's. */
const NAMES_A_CITY = 0.5;
const LONGEST_NAME = 3;
const SPLIT_DOUBT = 0.02;

export const cityWordsOf = (city: string): string[] => wordsOf(city).map(canonicalCityWord);

/** The names of a region's towns, found among a caller's words. */
export class CityNames {
  private readonly words = new Map<number, readonly string[]>();
  readonly distinct: ReadonlySet<string>;
  private readonly initials: ReadonlySet<string>;
  readonly withHouses: string[];

  constructor({ strings, streets }: AddressTable) {
    const own = new Set<string>();
    streets.city.forEach((city, i) => {
      if (streets.houses[i + 1]! > streets.houses[i]!) own.add(strings[city]!);
    });
    this.withHouses = [...own];
    for (const city of new Set(streets.city)) this.words.set(city, cityWordsOf(strings[city]!));
    const all = [...this.words.values()];
    this.distinct = new Set(all.flat());
    this.initials = new Set(
      all.filter((words) => words.length > 1).map((words) => words.map((word) => word[0]).join('')),
    );
  }

  /** Whether the region has one town only. */
  get isAlone(): boolean {
    return this.withHouses.length < 2;
  }

  /** By the number of the town's name in the table. */
  wordsOf(city: number): readonly string[] {
    return this.words.get(city) ?? [];
  }

  /** Whether a word is, or begins, a part of some town's name. */
  names(word: string, mayBePrefix: boolean, costOf: WordCost): boolean {
    if (this.initials.has(word) || this.distinct.has(canonicalCityWord(word))) return true;
    if (/^\d/.test(word) || (word.length < 3 && !mayBePrefix)) return false;
    for (const known of this.distinct) {
      const cost = cityWordCost(word, known, mayBePrefix, costOf);
      if (cost !== null && cost < NAMES_A_CITY) return true;
    }
    return false;
  }

  /** "1210 heron larchmere cove": the same reading with the last, or first, words taken for a town. */
  splitOff(way: ParsedAddress, names: (word: string, isLast: boolean) => boolean): ParsedAddress[] {
    const { street, cross } = way;
    const words = cross ?? street;
    const found: ParsedAddress[] = [];
    const add = (rest: readonly string[], city: readonly string[]): void => {
      found.push({
        ...way,
        ...(cross ? { cross: rest } : { street: rest }),
        tail: [...city, ...way.tail],
        doubt: way.doubt + SPLIT_DOUBT,
      });
    };
    const most = Math.min(LONGEST_NAME, words.length - 1);
    for (let count = 1; count <= most; count++) {
      if (!names(words[words.length - count]!, count === 1)) break;
      add(words.slice(0, -count), words.slice(-count));
    }
    if (cross) return found;
    for (let count = 1; count <= most; count++) {
      if (!names(words[count - 1]!, false)) break;
      add(words.slice(count), words.slice(0, count));
    }
    return found;
  }
}
