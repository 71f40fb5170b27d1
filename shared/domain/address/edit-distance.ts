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
  let beforeLast: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    let least = i;
    for (let j = 1; j <= b.length; j++) {
      const isSame = a.charCodeAt(i - 1) === b.charCodeAt(j - 1);
      let cost = Math.min(last[j]! + 1, row[j - 1]! + 1, last[j - 1]! + (isSame ? 0 : 1));
      const isSwap =
        i > 1 &&
        j > 1 &&
        a.charCodeAt(i - 1) === b.charCodeAt(j - 2) &&
        a.charCodeAt(i - 2) === b.charCodeAt(j - 1);
      if (isSwap) cost = Math.min(cost, beforeLast[j - 2]! + 1);
      row.push(cost);
      if (cost < least) least = cost;
    }
    // A swap looks one row further back, so both rows must be out of reach.
    if (least > limit && Math.min(...last) > limit) return limit + 1;
    beforeLast = last;
    last = row;
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
