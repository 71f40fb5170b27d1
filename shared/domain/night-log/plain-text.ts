/** ASCII with single spaces: most cells, most of the time. */
const TIDY = /^(?:[!-~]+(?: [!-~]+)*)?$/;

/**
 * Text without what makes equal words look different: case, accents, typographic quotes and runs of
 * white space. Punctuation stays.
 */
export function plain(text: string): string {
  if (TIDY.test(text)) return text.toLowerCase();
  // Almost every cell is ASCII already, and normalising is the dear part.
  // eslint-disable-next-line no-control-regex
  const ascii = /^[\x00-\x7f]*$/.test(text)
    ? text
    : text
        .normalize('NFD')
        .replace(/[\u0300-\u036f]/g, '')
        .replace(/[\u2018\u2019\u02bc\u00b4]/g, "'")
        .replace(/[\u201c\u201d]/g, '"')
        .replace(/[\u2010-\u2015\u2212]/g, '-')
        .replace(/[\u00a0\u2007\u202f]/g, ' ');
  return ascii.toLowerCase().replace(/\s+/g, ' ').trim();
}

/** Letters, digits and single spaces only; for comparing names and streets. */
export function bare(text: string): string {
  return plain(text)
    .replace(/['.]/g, '')
    .replace(/[^a-z0-9]+/g, ' ')
    .trim();
}

/**
 * How many letters have to be typed, dropped, replaced or swapped with a neighbour to turn one text
 * into the other (restricted Damerau-Levenshtein). Stops early and returns `limit + 1` beyond `limit`.
 */
export function editDistance(a: string, b: string, limit = 3): number {
  if (a === b) return 0;
  if (Math.abs(a.length - b.length) > limit) return limit + 1;
  let beforeLast: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    let best = i;
    for (let j = 1; j <= b.length; j++) {
      const same = a[i - 1] === b[j - 1];
      let cost = Math.min(
        (last[j] ?? 0) + 1,
        (row[j - 1] ?? 0) + 1,
        (last[j - 1] ?? 0) + (same ? 0 : 1),
      );
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) {
        cost = Math.min(cost, (beforeLast[j - 2] ?? 0) + 1);
      }
      row.push(cost);
      best = Math.min(best, cost);
    }
    if (best > limit) return limit + 1;
    beforeLast = last;
    last = row;
  }
  return last[b.length] ?? limit + 1;
}

/** A cell that says nothing: blank, dashes, "n/a", "?". */
export function saysNothing(text: string): boolean {
  return /^(?:[\s\-–—_.*=/\\?,;:|]*|n\/?a\.?|none|null|nil|unk(?:nown)?|not given|no answer|tbd|xx+)$/i.test(
    text.trim(),
  );
}

/** A cell that repeats the one above it. */
export function saysDitto(text: string): boolean {
  return /^(?:"|''|“|”|„|〃|-"-|- " -|"{2}|ditto|do\.|same|same as (?:above|prev(?:ious)?|last)|see above|idem|as above|(?:lo )?mismo)\.?$/i.test(
    text.trim(),
  );
}
