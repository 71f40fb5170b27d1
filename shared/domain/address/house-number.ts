/**
 * A house number as a figure that sorts numbers along a street. "218-09" counts as 218 and 9
 * hundredths of a hundred, as such numbers are given out; "12A" and "12 1/2" come after 12.
 * Null when there is no figure in it.
 */
export function houseNumberOrder(number: string): number | null {
  const found = /^\s*[a-z]?(\d{1,6})(?:\s*-\s*(\d{1,4}))?\s*([a-z])?(?:\s+1\/2)?/i.exec(number);
  if (!found) return null;
  const [, first, second, letter] = found;
  const half = number.includes('1/2') ? 0.5 : 0;
  const suffix = letter ? (letter.toLowerCase().charCodeAt(0) - 96) / 100 : 0;
  return second === undefined
    ? Number(first) + half + suffix
    : Number(first) * 10_000 + Number(second) + suffix;
}

/** One spelling for all spellings of a number: "218 - 09" and "218-9" are the same house. */
export function canonicalNumber(number: string): string {
  return number
    .toLowerCase()
    .replace(/\s*-\s*/g, '-')
    .replace(/-0+(?=\d)/g, '-')
    .replace(/(\d)\s+(?=[a-z]$)/, '$1')
    .replace(/\s+/g, ' ')
    .trim();
}

/**
 * Other ways to write a number that people write without its hyphen: "21809" may be 218-09. The
 * part after the hyphen has two figures, as such numbers are given out, or one or three.
 */
export function hyphenatedForms(number: string): string[] {
  if (!/^\d{3,6}$/.test(number)) return [];
  return [2, 1, 3]
    .filter((figures) => figures < number.length)
    .map((figures) => `${number.slice(0, -figures)}-${number.slice(-figures)}`);
}

/** Whether the number belongs to the even side; for "218-09" the part after the hyphen decides. */
export function isEvenNumber(order: number): boolean {
  return Math.floor(order) % 2 === 0;
}
