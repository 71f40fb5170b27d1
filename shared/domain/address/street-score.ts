import { editDistance } from './edit-distance';
import { isDirection, isType, longType, type StreetWords } from './street-words';

/**
 * What it costs to take a caller's words for a street. 0 is word for word; above about 1.2 the two
 * have little to do with each other. The figures are our estimate, set on typed and misspelt
 * addresses of the demo county and of a real extract.
 */
const COST = {
  missingName: 1,
  missingDirection: 0.15,
  wrongDirection: 0.8,
  needlessDirection: 0.4,
  missingType: 0.1,
  wrongType: 0.45,
  needlessType: 0.3,
  extraWord: 0.4,
  extraTail: 0.08,
  wrongCity: 0.8,
} as const;

/** The words of a search, and what may be said about them in advance. */
export interface Query {
  readonly street: readonly string[];
  readonly tail: readonly string[];
  /** Whether the last word may still be unfinished. */
  readonly isTyping: boolean;
  /** Words of the tail that are part of some city's name in this region. */
  readonly namesACity: boolean;
}

export interface Candidate {
  readonly words: StreetWords;
  readonly city: readonly string[];
}

/** Cost of reading one word for another; null when they are too different. */
export function wordCost(said: string, known: string, mayBePrefix: boolean): number | null {
  if (said === known) return 0;
  if (/^\d/.test(said) || /^\d/.test(known))
    return mayBePrefix && known.startsWith(said) ? 0.3 : null;
  let best: number | null = null;
  if (mayBePrefix && said.length >= 1 && known.startsWith(said))
    best = 0.1 + 0.02 * (known.length - said.length);
  const limit = known.length <= 3 ? (said.length >= 3 ? 1 : 0) : known.length <= 8 ? 2 : 3;
  const off = editDistance(said, known, limit);
  if (off <= limit) {
    const cost = (off * 2.1) / Math.max(known.length, said.length, 4);
    if (best === null || cost < best) best = cost;
  }
  // A word whose end is missing and that has one slip besides: "hearo" for "heronwood".
  if (mayBePrefix && said.length >= 4 && known.length > said.length + 1) {
    const start = editDistance(said, known.slice(0, said.length), 1);
    if (start <= 1 && (best === null || best > 0.5)) best = 0.5;
  }
  return best !== null && best < 0.95 ? best : null;
}

/** Cost of reading a search as this street in this city. */
export function streetCost(query: Query, { words, city }: Candidate): number {
  const left = [...query.street];
  const mayBePrefix = (i: number): boolean =>
    query.isTyping && query.tail.length === 0 && i === left.length - 1;
  let cost = nameCost(words.names, left, mayBePrefix);
  cost += directionCost(words.directions, left);
  cost += typeCost(words.types, left, query.isTyping);
  return cost + cityCost(query, city, left);
}

/** The part of the cost that the street's name alone causes; no street of that name costs less. */
export function namesCost(query: Query, names: readonly string[]): number {
  const left = [...query.street];
  return nameCost(
    names,
    left,
    (i) => query.isTyping && query.tail.length === 0 && i === left.length - 1,
  );
}

/** Matches the street's own words, the longest first, and takes them out of what is left. */
function nameCost(
  names: readonly string[],
  left: string[],
  mayBePrefix: (i: number) => boolean,
): number {
  let cost = 0;
  const open = [...names].sort((a, b) => b.length - a.length);
  for (const name of open) {
    let best = -1;
    let least: number = COST.missingName;
    left.forEach((said, i) => {
      const found = wordCost(said, name, mayBePrefix(i));
      if (found !== null && found < least) {
        least = found;
        best = i;
      }
    });
    // "blue bell" for "bluebell"
    for (let i = 0; i + 1 < left.length && least > 0.3; i++) {
      const found = wordCost(left[i]! + left[i + 1]!, name, false);
      if (found !== null && found + 0.1 < least) {
        least = found + 0.1;
        left.splice(i, 2, name);
        best = i;
      }
    }
    cost += least;
    if (best >= 0) left.splice(best, 1);
  }
  return cost / Math.sqrt(Math.max(1, names.length));
}

function directionCost(directions: readonly string[], left: string[]): number {
  const said = left.filter((word, i) => isDirection(word) && (i === 0 || left.length > 0));
  let cost = 0;
  for (const direction of directions) {
    const at = left.indexOf(direction);
    if (at >= 0) left.splice(at, 1);
    else cost += said.length > 0 ? COST.wrongDirection : COST.missingDirection;
  }
  const rest = left.filter(isDirection);
  if (rest.length > 0) {
    // A wrong direction has been paid for above.
    if (directions.length === 0) cost += COST.needlessDirection * rest.length;
    for (const word of rest) left.splice(left.indexOf(word), 1);
  }
  return cost;
}

function typeCost(types: readonly string[], left: string[], isTyping: boolean): number {
  let cost = 0;
  for (const type of types) {
    const at = left.findIndex(
      (word, i) => word === type || isAlmostType(word, type, isTyping && i === left.length - 1),
    );
    if (at >= 0) {
      cost += left[at] === type ? 0 : 0.05;
      left.splice(at, 1);
      continue;
    }
    const other = left.findIndex(isType);
    if (other >= 0) {
      left.splice(other, 1);
      cost += COST.wrongType;
    } else cost += COST.missingType;
  }
  const needless = left.findIndex(isType);
  if (types.length === 0 && needless >= 0) {
    left.splice(needless, 1);
    cost += COST.needlessType;
  }
  return cost;
}

/** "stret" for street, or "stre" while it is being typed. */
function isAlmostType(word: string, type: string, mayBePrefix: boolean): boolean {
  const long = longType(type);
  if (mayBePrefix && word.length >= 2 && long.startsWith(word)) return true;
  return (
    word.length >= 4 && long.length >= 4 && editDistance(word, long, 2) <= (long.length > 5 ? 2 : 1)
  );
}

function cityCost(query: Query, city: readonly string[], left: string[]): number {
  let cost = 0;
  const spare = [...city];
  const isCityWord = (word: string, mayBePrefix: boolean): boolean => {
    const at = spare.findIndex((known) => {
      const found = wordCost(word, known, mayBePrefix);
      return found !== null && found < 0.6;
    });
    if (at < 0) return false;
    spare.splice(at, 1);
    return true;
  };
  left.forEach((word, i) => {
    if (!isCityWord(word, query.isTyping && query.tail.length === 0 && i === left.length - 1))
      cost += COST.extraWord;
  });
  let isNamed = false;
  query.tail.forEach((word, i) => {
    if (isCityWord(word, query.isTyping && i === query.tail.length - 1)) isNamed = true;
    else cost += COST.extraTail;
  });
  if (query.namesACity && !isNamed) cost += COST.wrongCity;
  return cost;
}
