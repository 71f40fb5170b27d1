import { editDistance } from './edit-distance';
import { matchCity } from './city-cost';
import { isDirection, isType, longDirection, longType, type StreetWords } from './street-words';
import { wordCost, type WordCost } from './word-cost';

/**
 * What it costs to take a caller's words for a street. 0 is word for word; above about 1.2 the two
 * have little to do with each other. The figures are our estimate, set on typed and misspelt
 * addresses of the demo county and of a real extract.
 */
const COST = {
  missingName: 1,
  missingNextName: 0.5,
  apart: 0.1,
  missingDirection: 0.15,
  almostDirection: 0.1,
  wrongDirection: 0.8,
  needlessDirection: 0.4,
  missingType: 0.1,
  almostType: 0.05,
  wrongType: 0.4,
  needlessType: 0.3,
  extraWord: 0.4,
  extraTail: 0.08,
  filler: 0.02,
  wrongCity: 0.8,
} as const;

/** Words that say nothing about where a place is. */
const FILLERS = new Set(
  'the a an of in on at by to and its is it that my our please house home number no up down over out just there'.split(
    ' ',
  ),
);
export const isFiller = (word: string): boolean => FILLERS.has(word);

/** The words of a search, and what may be said about them in advance. */
export interface Query {
  readonly street: readonly string[];
  readonly tail: readonly string[];
  /** Whether the last word may still be unfinished. */
  readonly isTyping: boolean;
  /** Words of the tail that are part of some city's name in this region. */
  readonly namesACity: boolean;
  /** Whether a word is a street's name of its own somewhere in the region, so that it is no slip. */
  readonly isKnown?: (word: string) => boolean;
  /** `wordCost`, or a stand-in that remembers. */
  readonly wordCost?: WordCost;
}

/** How the words name a town. */
export interface CityFit extends Fit {
  readonly isNamed: boolean;
}

export interface Candidate {
  readonly words: StreetWords;
  readonly city: readonly string[];
}

/** How a street fits what was said. */
export interface Fit {
  readonly cost: number;
  /**
   * Something that was said speaks against it: another type, direction, town or name; or the
   * direction was not said by which two streets are told apart.
   */
  readonly isAgainst: boolean;
}

/** A street's own words matched; the rest is for the town. */
export interface StreetFit extends Fit {
  /** Words that the street does not explain, with their place in the query. */
  readonly left: readonly Word[];
}

interface Word {
  readonly said: string;
  readonly mayBePrefix: boolean;
}

/** Cost of reading a search as this street in this city. */
export function streetCost(query: Query, { words, city }: Candidate): number {
  const street = fitStreet(query, words);
  return street.cost + fitCity(query, street.left, city).cost;
}

/** The part of the cost that the street's name alone causes; no street of that name costs less. */
export function namesCost(query: Query, names: readonly string[]): number {
  return takeNames(query, names, wordsOf(query)).cost;
}

/** How well the words name this street, whatever its town. */
export function fitStreet(query: Query, words: StreetWords): StreetFit {
  const left = wordsOf(query);
  const names = takeNames(query, words.names, left);
  const directions = takeDirections(words.directions, left);
  const types = takeTypes(words.types, left);
  return {
    cost: names.cost + directions.cost + types.cost,
    isAgainst: names.isAgainst || directions.isAgainst || types.isAgainst,
    left,
  };
}

/** How well what the street left unexplained names this town. */
export function fitCity(query: Query, left: readonly Word[], city: readonly string[]): CityFit {
  const said = [
    ...left,
    ...query.tail.map((word, i) => ({
      said: word,
      mayBePrefix: query.isTyping && i === query.tail.length - 1,
    })),
  ];
  if (said.length === 0) return { cost: 0, isAgainst: false, isNamed: false };
  const { cost: named, used } = matchCity(
    said.map((word) => word.said),
    city,
    (i) => said[i]!.mayBePrefix,
    query.wordCost,
  );
  let cost = named;
  let isAgainst = false;
  said.forEach((word, i) => {
    if (used.has(i)) return;
    if (FILLERS.has(word.said)) cost += COST.filler;
    else if (i < left.length) {
      cost += COST.extraWord;
      isAgainst = true;
    } else {
      cost += COST.extraTail;
      // Two letters are a state; a longer word beside no known town may be a town that is not here.
      if (used.size === 0 && word.said.length > 2) isAgainst = true;
    }
  });
  if (query.namesACity && used.size === 0) {
    cost += COST.wrongCity;
    isAgainst = true;
  }
  return { cost, isAgainst, isNamed: used.size > 0 };
}

function wordsOf({ street, tail, isTyping }: Query): Word[] {
  return street.map((said, i) => ({
    said,
    mayBePrefix: isTyping && tail.length === 0 && i === street.length - 1,
  }));
}

/** Matches the street's own words, the longest first, and takes them out of what is left. */
function takeNames(query: Query, names: readonly string[], left: Word[]): Fit {
  const costOf = query.wordCost ?? wordCost;
  const together = names.length > 1 ? takeTogether(names, left, costOf) : null;
  if (together) return together;
  let cost = 0;
  let isAgainst = false;
  const open = names.length > 1 ? [...names].sort((a, b) => b.length - a.length) : names;
  for (const name of open) {
    const one = cheapest(left, name, costOf);
    const two = one && one.cost <= COST.apart ? null : cheapestPair(left, name, costOf);
    const best = two && (!one || two.cost < one.cost) ? two : one;
    if (!best || best.cost >= COST.missingName) {
      // "Cedar Rd" for Cedar Pond Road: the first word is the one that people keep.
      cost += name === names[0] ? COST.missingName : COST.missingNextName;
      isAgainst = true;
      continue;
    }
    cost += best.cost;
    const [taken] = left.splice(best.at, best === two ? 2 : 1);
    const isSlip = best.cost > 0 && best === one && !taken!.mayBePrefix;
    if (isSlip && query.isKnown?.(taken!.said) === true) isAgainst = true;
  }
  return { cost: cost / Math.sqrt(Math.max(1, names.length)), isAgainst };
}

/** "halyardferry" for "halyard ferry" */
function takeTogether(names: readonly string[], left: Word[], costOf: WordCost): Fit | null {
  const name = names.map(longType).join('');
  const long = left.map((word) => (word.said.length + 1 < name.length ? NO_WORD : word));
  const found = cheapest(long, name, costOf);
  if (!found || found.cost >= 0.5) return null;
  left.splice(found.at, 1);
  return { cost: found.cost + COST.apart, isAgainst: false };
}

const NO_WORD: Word = { said: '', mayBePrefix: false };

interface Found {
  readonly at: number;
  readonly cost: number;
}

function cheapest(left: readonly Word[], name: string, costOf: WordCost): Found | null {
  let best: Found | null = null;
  for (let at = 0; at < left.length; at++) {
    const cost = costOf(left[at]!.said, name, left[at]!.mayBePrefix);
    if (cost !== null && (best === null || cost < best.cost)) best = { at, cost };
  }
  return best;
}

/** "blue bell" for "bluebell" */
function cheapestPair(left: readonly Word[], name: string, costOf: WordCost): Found | null {
  let best: Found | null = null;
  for (let at = 0; at + 1 < left.length; at++) {
    const [one, two] = [left[at]!, left[at + 1]!];
    if (Math.abs(one.said.length + two.said.length - name.length) > 2) continue;
    const found = costOf(one.said + two.said, name, two.mayBePrefix);
    if (found === null) continue;
    const cost = found + COST.apart;
    if (best === null || cost < best.cost) best = { at, cost };
  }
  return best;
}

function takeDirections(directions: readonly string[], left: Word[]): Fit {
  let cost = 0;
  let isAgainst = false;
  const hasOther = left.some(({ said }) => isDirection(said));
  for (const direction of directions) {
    const at = left.findIndex(({ said }) => said === direction);
    const almost = at >= 0 ? at : left.findIndex((word) => isAlmostDirection(word, direction));
    if (almost >= 0) {
      left.splice(almost, 1);
      if (at < 0) cost += COST.almostDirection;
    } else if (hasOther) {
      cost += COST.wrongDirection;
      isAgainst = true;
    } else {
      // The street's other half may have the same number, and need not be known.
      cost += COST.missingDirection;
      isAgainst = true;
    }
  }
  for (let i = left.length - 1; i >= 0; i--) {
    const { said, mayBePrefix } = left[i]!;
    if (!isDirection(said)) continue;
    // A lone letter at the end may become any word.
    if (mayBePrefix && said.length === 1) cost += COST.filler;
    // A wrong direction has been paid for above.
    else if (directions.length === 0) {
      cost += COST.needlessDirection;
      isAgainst = true;
    }
    left.splice(i, 1);
  }
  return { cost, isAgainst };
}

/** "nroth" for north, or "nor" while it is being typed. */
function isAlmostDirection({ said, mayBePrefix }: Word, direction: string): boolean {
  const long = longDirection(direction);
  if (mayBePrefix && said.length >= 1 && long.startsWith(said)) return true;
  return said.length >= 4 && editDistance(said, long, 1) <= 1;
}

function takeTypes(types: readonly string[], left: Word[]): Fit {
  let cost = 0;
  let isAgainst = false;
  for (const type of types) {
    const exact = left.findIndex(({ said }) => isSameType(said, type));
    const at = exact >= 0 ? exact : left.findIndex((word) => isAlmostType(word, type));
    if (at >= 0) {
      if (exact < 0) cost += COST.almostType;
      left.splice(at, 1);
      continue;
    }
    const other = left.findIndex(({ said, mayBePrefix }) => isType(said) && !mayBePrefix);
    if (other >= 0) {
      left.splice(other, 1);
      cost += COST.wrongType;
      isAgainst = true;
    } else cost += COST.missingType;
  }
  if (types.length > 0) return { cost, isAgainst };
  const needless = left.findIndex(({ said }) => isType(said));
  if (needless < 0) return { cost, isAgainst };
  left.splice(needless, 1);
  return { cost: cost + COST.needlessType, isAgainst: true };
}

/** Numbered roads are called highway or route as people please. */
const isSameType = (said: string, type: string): boolean =>
  said === type || (NUMBERED.has(said) && NUMBERED.has(type));
const NUMBERED = new Set(['hwy', 'rte']);

/** "stret" for street, or "stre" while it is being typed. */
function isAlmostType({ said, mayBePrefix }: Word, type: string): boolean {
  const long = longType(type);
  if (mayBePrefix && (long.startsWith(said) || type.startsWith(said))) return true;
  return (
    said.length >= 4 && long.length >= 4 && editDistance(said, long, 2) <= (long.length > 5 ? 2 : 1)
  );
}
