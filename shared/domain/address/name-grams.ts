/**
 * Finds the names that share most two- and three-letter pieces with a search, misspelt or
 * unfinished words included; the exact cost is worked out for those few only.
 */
export class NameGrams {
  private readonly postings = new Map<string, number[]>();
  private readonly sizes: number[] = [];
  private readonly hits: Uint16Array;

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
    const scored = touched.map((number) => {
      const hits = this.hits[number]!;
      this.hits[number] = 0;
      return { number, score: hits / this.sizes[number]! + hits / grams.size };
    });
    return scored
      .sort((a, b) => b.score - a.score || a.number - b.number)
      .slice(0, limit)
      .map(({ number }) => number);
  }
}

/** Pieces of a word, its beginning marked; a number is one piece, for 12 and 21 share nothing. */
function gramsOf(word: string): string[] {
  if (/^\d/.test(word)) return [`#${word}`];
  const marked = `^${word}`;
  const grams: string[] = [];
  for (let i = 0; i < marked.length - 1; i++) {
    grams.push(marked.slice(i, i + 2));
    if (i < marked.length - 2) grams.push(marked.slice(i, i + 3));
  }
  return grams;
}
