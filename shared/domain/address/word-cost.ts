import { editDistance } from './edit-distance';
import { soundKey } from './sounds-alike';
import { longType } from './street-words';

/** A dearer word is another word. */
const ANOTHER_WORD = 0.95;
/** What one slip in a word of four letters costs, times its length. */
const SLIP = 2.1;

export type WordCost = (said: string, known: string, mayBePrefix: boolean) => number | null;

/** Cost of reading one word for another, 0 to 0.95; null when they are too different. */
export function wordCost(
  said: string,
  known: string,
  mayBePrefix: boolean,
  soundOf: (word: string) => string = soundKey,
): number | null {
  if (said === known) return 0;
  if (/^\d/.test(said) || /^\d/.test(known))
    return mayBePrefix && known.startsWith(said) ? 0.3 : null;
  // "Point" stands as pt, but nobody misspells it as that.
  const word = longType(known);
  let best = Infinity;
  if (mayBePrefix && word.startsWith(said)) best = 0.1 + 0.02 * (word.length - said.length);
  const limit = word.length <= 3 ? (said.length >= 3 ? 1 : 0) : word.length <= 8 ? 2 : 3;
  const off = editDistance(said, word, limit);
  if (off <= limit) {
    const cost = (off * SLIP) / Math.max(word.length, said.length, 4);
    // People get a word's beginning right; another first letter is mostly another word.
    best = Math.min(best, cost + (said[0] === word[0] ? 0 : 0.1));
  }
  const alike = said.length > 3 ? 0.3 : 0.45;
  if (best > alike && said.length >= 3 && Math.abs(said.length - word.length) <= 3) {
    if (soundOf(said) === soundOf(word)) best = alike;
  }
  // A word whose end is missing and that has one slip besides: "hearo" for "heronwood".
  if (best > 0.5 && mayBePrefix && said.length >= 4 && word.length > said.length + 1) {
    if (editDistance(said, word.slice(0, said.length), 1) <= 1) best = 0.5;
  }
  return best < ANOTHER_WORD ? best : null;
}

/** Remembers what was worked out: the readings of one question compare the same words again and again. */
export class WordCosts {
  private readonly costs = new Map<string, Map<string, number | null>>();
  private readonly ofPrefixes = new Map<string, Map<string, number | null>>();
  private readonly sounds = new Map<string, string>();

  /** @param known sounds of words that never change, such as those of a region's streets */
  constructor(private readonly known: ReadonlyMap<string, string> = new Map()) {}

  readonly of: WordCost = (said, known, mayBePrefix) => {
    if (said === known) return 0;
    const costs = mayBePrefix ? this.ofPrefixes : this.costs;
    let own = costs.get(said);
    if (!own) costs.set(said, (own = new Map<string, number | null>()));
    const found = own.get(known);
    if (found !== undefined) return found;
    const cost = wordCost(said, known, mayBePrefix, this.soundOf);
    own.set(known, cost);
    return cost;
  };

  private readonly soundOf = (word: string): string => {
    const found = this.known.get(word) ?? this.sounds.get(word);
    if (found !== undefined) return found;
    const sound = soundKey(word);
    this.sounds.set(word, sound);
    return sound;
  };
}
