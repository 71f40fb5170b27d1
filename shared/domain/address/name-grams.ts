import { soundKey } from './sounds-alike';
import { longType } from './street-words';

/** Names that share less than this with a search, measured by the most similar one, are left out. */
const LEAST_SHARE = 0.25;

/**
 * Finds the names that share most two- and three-letter pieces with a search, misspelt or
 * unfinished words included; the exact cost is worked out for those few only.
 */
export class NameGrams {
  private readonly postings = new Map<string, number[]>();
  private readonly sizes: number[] = [];
  private readonly hits: Uint16Array;
  private readonly scores: Float64Array;

  /** @param names each a list of canonical words */
  constructor(names: readonly (readonly string[])[]) {
    names.forEach((words, number) => {
      const grams = new Set(words.flatMap(gramsOf));
      this.sizes.push(grams.size);
      for (const gram of grams) {
        const posting = this.postings.get(gram);
        if (posting) posting.push(number);
        else this.postings.set(gram, [number]);
      }
    });
    this.hits = new Uint16Array(names.length);
    this.scores = new Float64Array(names.length);
  }

  /** Numbers of the most similar names, best first. */
  similar(words: readonly string[], limit: number): number[] {
    const grams = new Set(words.flatMap(gramsOf));
    const touched: number[] = [];
    for (const gram of grams) {
      for (const number of this.postings.get(gram) ?? []) {
        if (this.hits[number] === 0) touched.push(number);
        this.hits[number] = this.hits[number]! + 1;
      }
    }
    let best = 0;
    for (const number of touched) {
      const hits = this.hits[number]!;
      this.hits[number] = 0;
      const score = hits / this.sizes[number]! + hits / grams.size;
      this.scores[number] = score;
      if (score > best) best = score;
    }
    return touched
      .filter((number) => this.scores[number]! >= best * LEAST_SHARE)
      .sort((a, b) => this.scores[b]! - this.scores[a]! || a - b)
      .slice(0, limit);
  }
}

/**
 * Pieces of a word, its beginning marked, and how it sounds; a number is one piece, for 12 and 21
 * share nothing.
 */
function gramsOf(short: string): string[] {
  if (/^\d/.test(short)) return [`#${short}`];
  const word = longType(short);
  const marked = `^${word}`;
  const grams: string[] = word.length > 2 ? [`~${soundKey(word)}`] : [];
  // Two letters that change places leave a short word without any piece of its own.
  if (word.length > 2 && word.length < 7) grams.push(`=${[...word].sort().join('')}`);
  for (let i = 0; i < marked.length - 1; i++) {
    grams.push(marked.slice(i, i + 2));
    if (i < marked.length - 2) grams.push(marked.slice(i, i + 3));
  }
  return grams;
}
