import { canonical } from './street-words';
import { wordCost, type WordCost } from './word-cost';

/** Words of town names that are written short. Source: USPS Publication 28, appendix C1; from memory. */
const SHORT: ReadonlyMap<string, string> = new Map(
  [
    'hbr harbor harbour harb',
    'vlg village vill villag',
    'bch beach',
    'spgs springs spg spring',
    'jct junction',
    'ft fort',
    'mt mount mnt',
    'mtn mountain',
    'is island isl',
    'lk lake',
    'hl hill hls hills',
    'crk creek ck',
    'vly valley',
    'ctr center centre cntr',
    'prt port',
    'hvn haven',
    'mls mills mill',
    'fls falls',
    'twp township',
  ].flatMap((line) => {
    const [short = '', ...long] = line.split(' ');
    return long.map((word): [string, string] => [word, short]);
  }),
);

/** One spelling for all spellings of a word of a town's name. */
export function canonicalCityWord(word: string): string {
  const short = canonical(word);
  return SHORT.get(short) ?? short;
}

/** Cost of taking a word for a word of a town's name, shortenings included; null when it is none. */
export function cityWordCost(
  said: string,
  known: string,
  mayBePrefix: boolean,
  costOf: WordCost = wordCost,
): number | null {
  const word = canonicalCityWord(said);
  if (word === known) return 0;
  const exact = costOf(word, known, mayBePrefix);
  let best = exact === null ? Infinity : exact;
  // "Tern" for Ternhaven; "Trnhvn".
  if (word.length >= 3 && known.length > word.length + 1) {
    if (known.startsWith(word)) best = Math.min(best, 0.15);
    else if (isShortened(word, known)) best = Math.min(best, 0.3);
  }
  return best < 0.6 ? best : null;
}

/** Whether the first letter is kept and the others stand in their order: "brnmth" for Brinemouth. */
function isShortened(word: string, known: string): boolean {
  if (word[0] !== known[0] || /^\d/.test(word)) return false;
  let at = 0;
  for (const letter of word) {
    at = known.indexOf(letter, at) + 1;
    if (at === 0) return false;
  }
  const vowels = (text: string): number => text.replace(/[^aeiouy]/g, '').length;
  return vowels(word) < vowels(known) && word.length * 2 >= known.length;
}

/** What is said of a town's name by some words. */
export interface CityMatch {
  readonly cost: number;
  /** Which of the words the name explains. */
  readonly used: ReadonlySet<number>;
}

/** Finds the words that name this town, wherever they stand among the others. */
export function matchCity(
  said: readonly string[],
  city: readonly string[],
  mayBePrefix: (i: number) => boolean,
  costOf: WordCost = wordCost,
): CityMatch {
  const used = new Set<number>();
  let cost = 0;
  for (const known of city) {
    let least = Infinity;
    let best = -1;
    said.forEach((word, i) => {
      if (used.has(i)) return;
      const found = cityWordCost(word, known, mayBePrefix(i), costOf);
      if (found !== null && found < least) {
        least = found;
        best = i;
      }
    });
    if (best < 0) continue;
    used.add(best);
    cost += least;
  }
  if (used.size > 0) return { cost, used };
  // "LC" for Larchmere Cove.
  const initials = city.map((word) => word[0] ?? '').join('');
  const at = city.length > 1 ? said.indexOf(initials) : -1;
  return at < 0 ? { cost: 0, used } : { cost: 0.2, used: new Set([at]) };
}
