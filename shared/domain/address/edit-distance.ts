/**
 * Least number of letters to add, drop, change or swap with a neighbour to make one word from the
 * other (Damerau and Levenshtein, optimal string alignment).
 *
 * @returns the distance, or `limit + 1` as soon as it is known to exceed the limit
 */
export function editDistance(a: string, b: string, limit: number): number {
  if (a === b) return 0;
  if (Math.abs(a.length - b.length) > limit) return limit + 1;
  // Each edit brings at most one letter that the other word lacks; most words fail here already.
  const lettersA = lettersIn(a);
  const lettersB = lettersIn(b);
  if (bitsIn(lettersA & ~lettersB) > limit || bitsIn(lettersB & ~lettersA) > limit)
    return limit + 1;
  return slowDistance(a, b, limit);
}

/** Rows of the table that are in use; kept, since words are compared by the ten thousand. */
const ROWS = [new Uint8Array(64), new Uint8Array(64), new Uint8Array(64)];

function slowDistance(a: string, b: string, limit: number): number {
  const width = b.length + 1;
  // Longer words than any name; a row of its own size serves as well.
  const rows = width <= 64 ? ROWS : ROWS.map(() => new Uint8Array(width));
  let [beforeLast, last, row] = rows as [Uint8Array, Uint8Array, Uint8Array];
  for (let j = 0; j < width; j++) last[j] = j;
  let leastBefore = 0;
  for (let i = 1; i <= a.length; i++) {
    row[0] = i;
    let least = i;
    const letter = a.charCodeAt(i - 1);
    for (let j = 1; j < width; j++) {
      const other = b.charCodeAt(j - 1);
      let cost = Math.min(last[j]! + 1, row[j - 1]! + 1, last[j - 1]! + (letter === other ? 0 : 1));
      const isSwap =
        i > 1 && j > 1 && letter === b.charCodeAt(j - 2) && a.charCodeAt(i - 2) === other;
      if (isSwap) cost = Math.min(cost, beforeLast[j - 2]! + 1);
      row[j] = cost;
      if (cost < least) least = cost;
    }
    // A swap looks one row further back, so both rows must be out of reach.
    if (least > limit && leastBefore > limit) return limit + 1;
    leastBefore = least;
    [beforeLast, last, row] = [last, row, beforeLast];
  }
  return Math.min(last[b.length]!, limit + 1);
}

/** One bit per letter; what is no letter shares the rest of the bits. */
function lettersIn(word: string): number {
  let bits = 0;
  for (let i = 0; i < word.length; i++) bits |= 1 << (word.charCodeAt(i) & 31);
  return bits;
}

function bitsIn(bits: number): number {
  let count = 0;
  for (let rest = bits; rest !== 0; rest &= rest - 1) count++;
  return count;
}
