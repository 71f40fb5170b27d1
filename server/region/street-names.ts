import { NameGrams } from '@shared/domain/address/name-grams';
import {
  fitStreet,
  isFiller,
  namesCost,
  type Query,
  type StreetFit,
} from '@shared/domain/address/street-score';
import {
  isDirection,
  isType,
  wordsOfStreet,
  type StreetWords,
} from '@shared/domain/address/street-words';
import { wordsOf, type AddressTable } from './address-table';

/** A street's name as one or more towns have it. */
export interface StreetName {
  readonly text: string;
  readonly words: StreetWords;
  /** Rows of the table's streets with this name: from the first up to, without, the end. */
  readonly first: number;
  readonly end: number;
}

export interface NameFit {
  readonly name: StreetName;
  readonly fit: StreetFit;
}

/** A dearer match is not shown at all. Our estimate. */
export const DEAREST = 1.25;
const CANDIDATES = 60;
/** A name so much farther from the words than the nearest one is no answer to them. Our estimate. */
const FARTHER = 0.7;
/** So many names may begin with the same letters. */
const MOST_WITH_PREFIX = 1_500;

/** The names of a region's streets, found by what people say and misspell. */
export class StreetNames {
  /** Names that differ in type and direction only: the dear part of the work is done once for them. */
  private readonly groups: StreetName[][] = [];
  private readonly grams: NameGrams;
  /** Each word of each group, sorted, for words that are still being typed. */
  private readonly byWord: readonly { readonly word: string; readonly group: number }[];
  readonly words: ReadonlySet<string>;

  constructor({ strings, streets, aliases }: AddressTable) {
    const groups = new Map<string, StreetName[]>();
    const byText = new Map<string, StreetName>();
    const add = (name: StreetName): void => {
      const key = name.words.names.join(' ');
      const known = groups.get(key);
      if (known) known.push(name);
      else groups.set(key, [name]);
    };
    for (let first = 0; first < streets.name.length;) {
      let end = first + 1;
      while (streets.name[end] === streets.name[first]) end++;
      const text = strings[streets.name[first]!]!;
      const name = { text, words: wordsOfStreet(wordsOf(text)), first, end };
      byText.set(text, name);
      add(name);
      first = end;
    }
    aliases.name.forEach((alias, i) => {
      const street = byText.get(strings[aliases.street[i]!]!);
      if (street) add({ ...street, words: wordsOfStreet(wordsOf(strings[alias]!)) });
    });
    this.groups = [...groups.values()];
    this.grams = new NameGrams(this.groups.map(namesOf));
    this.byWord = this.groups
      .flatMap((group, number) => namesOf(group).map((word) => ({ word, group: number })))
      .sort((a, b) => (a.word < b.word ? -1 : a.word > b.word ? 1 : 0));
    this.words = new Set(this.byWord.map(({ word }) => word));
  }

  /** Whether some street has this word in its name. */
  isKnown(word: string): boolean {
    return this.words.has(word);
  }

  /** Streets whose names are like the words of the search. */
  similar(query: Query): NameFit[] {
    const groups = [...this.candidates(query)].map((number) => {
      const group = this.groups[number]!;
      return { group, cost: namesCost(query, namesOf(group)) };
    });
    const least = Math.min(...groups.map(({ cost }) => cost));
    const most = Math.min(DEAREST, least + FARTHER);
    return groups
      .filter(({ cost }) => cost <= most)
      .flatMap(({ group }) => group.map((name) => ({ name, fit: fitStreet(query, name.words) })))
      .filter(({ fit }) => fit.cost <= DEAREST);
  }

  private candidates({ street, tail, isTyping }: Query): Set<number> {
    const telling = street.filter(
      (word) => (!isType(word) && !isDirection(word) && !isFiller(word)) || this.isKnown(word),
    );
    const words = telling.length > 0 ? telling : street;
    // Two words may be one name that was typed apart.
    const glued = words.slice(1).map((word, i) => words[i]! + word);
    const found = new Set(this.grams.similar([...words, ...glued], CANDIDATES));
    const last = street[street.length - 1];
    if (isTyping && tail.length === 0 && last !== undefined)
      for (const group of this.beginningWith(last)) found.add(group);
    return found;
  }

  private beginningWith(start: string): number[] {
    let low = 0;
    let high = this.byWord.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (this.byWord[middle]!.word < start) low = middle + 1;
      else high = middle;
    }
    const found: number[] = [];
    while (found.length < MOST_WITH_PREFIX && this.byWord[low]?.word.startsWith(start) === true)
      found.push(this.byWord[low++]!.group);
    return found;
  }
}

const namesOf = (group: readonly StreetName[]): readonly string[] => group[0]!.words.names;
