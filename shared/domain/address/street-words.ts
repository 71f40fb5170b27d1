import { ordinalOf } from './address-tokens';

/**
 * Words of street names and how they are shortened.
 *
 * Source: USPS Publication 28, "Postal Addressing Standards", appendices B (directions) and C1
 * (street suffixes); the choice of words and the further spellings that callers use are from memory
 * and common practice.
 */
export type WordKind = 'direction' | 'type' | 'name';

/** Short form, long form, then other spellings. */
const TYPES: readonly (readonly string[])[] = [
  ['aly', 'alley', 'ally'],
  ['ave', 'avenue', 'av', 'aven', 'avn', 'avnue'],
  ['blvd', 'boulevard', 'boul', 'boulv', 'bvd'],
  ['br', 'branch'],
  ['brg', 'bridge'],
  ['cir', 'circle', 'circ', 'crcl'],
  ['cswy', 'causeway', 'causwa'],
  ['ct', 'court', 'crt'],
  ['cv', 'cove'],
  ['cres', 'crescent', 'crsnt'],
  ['xing', 'crossing', 'crssng'],
  ['dr', 'drive', 'driv', 'drv'],
  ['expy', 'expressway', 'expr'],
  ['ext', 'extension'],
  ['fwy', 'freeway'],
  ['grv', 'grove'],
  ['hts', 'heights'],
  ['hwy', 'highway', 'hiway', 'hiwy', 'hway'],
  ['lndg', 'landing'],
  ['ln', 'lane', 'la'],
  ['loop', 'loop', 'loops'],
  ['mews', 'mews'],
  ['mnr', 'manor'],
  ['park', 'park', 'prk'],
  ['path', 'path'],
  ['pike', 'pike', 'pk'],
  ['pkwy', 'parkway', 'parkwy', 'pkway', 'pky'],
  ['pl', 'place', 'plc'],
  ['plz', 'plaza'],
  ['pt', 'point'],
  ['rd', 'road', 'rod'],
  ['row', 'row'],
  ['rte', 'route', 'rt'],
  ['run', 'run'],
  ['sq', 'square', 'sqr'],
  ['st', 'street', 'str', 'strt', 'saint'],
  ['ter', 'terrace', 'terr'],
  ['trl', 'trail'],
  ['tpke', 'turnpike', 'trnpk'],
  ['vw', 'view'],
  ['walk', 'walk'],
  ['way', 'way', 'wy'],
];

const DIRECTIONS: readonly (readonly string[])[] = [
  ['n', 'north', 'no', 'nth'],
  ['s', 'south', 'so', 'sth'],
  ['e', 'east'],
  ['w', 'west'],
  ['ne', 'northeast'],
  ['nw', 'northwest'],
  ['se', 'southeast'],
  ['sw', 'southwest'],
];

const shortOf = (table: readonly (readonly string[])[]): ReadonlyMap<string, string> =>
  new Map(table.flatMap((words) => words.map((word): [string, string] => [word, words[0]!])));

const SHORT_TYPE = shortOf(TYPES);
const SHORT_DIRECTION = shortOf(DIRECTIONS);
const LONG_TYPE: ReadonlyMap<string, string> = new Map(
  TYPES.map((words) => [words[0]!, words[1]!]),
);

export const isType = (canonical: string): boolean => LONG_TYPE.has(canonical);
export const isDirection = (canonical: string): boolean =>
  SHORT_DIRECTION.get(canonical) === canonical;

const LONG_DIRECTION: ReadonlyMap<string, string> = new Map(
  DIRECTIONS.map((words) => [words[0]!, words[1]!]),
);
/** 'n' gives 'north'. */
export const longDirection = (short: string): string => LONG_DIRECTION.get(short) ?? short;

/** The long form of a type's short form: 'st' gives 'street'. */
export const longType = (short: string): string => LONG_TYPE.get(short) ?? short;

/** One spelling for all spellings of a word: 'Street' and 'str' give 'st', '94th' gives '94'. */
export function canonical(word: string): string {
  const ordinal = /^(\d+)(st|nd|rd|th)$/.exec(word);
  if (ordinal) return ordinal[1]!;
  const spoken = ordinalOf(word);
  if (spoken !== null) return String(spoken);
  return SHORT_DIRECTION.get(word) ?? SHORT_TYPE.get(word) ?? word;
}

/** The words of a street or place in one spelling: "Cty Rd 7" and "CR 7" give county, rd, 7. */
export const canonicalWords = (tokens: readonly string[]): string[] =>
  tokens.flatMap((token, i) => {
    const next = tokens[i + 1];
    if (token === 'cr' && next !== undefined && /^\d/.test(next)) return ['county', 'rd'];
    const isCounty = (token === 'co' || token === 'cty') && canonical(next ?? '') === 'rd';
    return [isCounty ? 'county' : canonical(token)];
  });

/** A street's words, told apart by the part that they play. */
export interface StreetWords {
  readonly names: readonly string[];
  readonly types: readonly string[];
  readonly directions: readonly string[];
}

/**
 * Tells a street's name from its type and direction: the direction stands first or last, the type
 * last or before a last direction. A street called "Park Avenue" or "Avenue N" keeps a name.
 */
export function wordsOfStreet(tokens: readonly string[]): StreetWords {
  let names = [...tokens];
  const types: string[] = [];
  const directions: string[] = [];
  if (names.length > 1 && isDirection(names[0]!)) directions.push(names.shift()!);
  if (names.length > 2 && isDirection(names[names.length - 1]!)) directions.push(names.pop()!);
  if (names.length > 1 && isType(names[names.length - 1]!)) types.push(names.pop()!);
  if (names.length > 1 && (names[0] === 'rte' || names[0] === 'hwy')) types.push(names.shift()!);
  if (names.length === 0) names = [...tokens];
  return { names, types, directions };
}

/** A street's name as the post writes it: "North Heron Street" gives "N Heron St". */
export function postalStreet(name: string): string {
  const words = name.split(/\s+/).filter((word) => word !== '');
  if (words.length < 2) return name;
  const last = words.length - 1;
  return words
    .map((word, i) => {
      const lower = word.toLowerCase();
      if (i === 0 && words.length > 2 && SHORT_DIRECTION.has(lower) && lower.length > 2)
        return SHORT_DIRECTION.get(lower)!.toUpperCase();
      if (i === last && SHORT_DIRECTION.has(lower) && lower.length > 2 && words.length > 2)
        return SHORT_DIRECTION.get(lower)!.toUpperCase();
      if (i !== last || lower === 'saint' || !LONG_FORMS.has(lower)) return word;
      const short = SHORT_TYPE.get(lower)!;
      return short[0]!.toUpperCase() + short.slice(1);
    })
    .join(' ');
}

const LONG_FORMS: ReadonlySet<string> = new Set(TYPES.map((words) => words[1]!));
