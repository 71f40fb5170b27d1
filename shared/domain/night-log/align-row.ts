import { fit } from './cell-shapes';
import type { ColumnMap, ColumnRole } from './column-map';

export interface AlignedRow {
  readonly cells: readonly string[];
  /** What was done to make the row fit its titles, in words; null when it fitted. */
  readonly mended: string | null;
}

/** Whose text most likely held the delimiter without quotes around it; others hardly ever do. */
const SPEAKS: Readonly<Partial<Record<ColumnRole, number>>> = {
  remarks: 0.9,
  detail: 0.5,
  address: 0.4,
  callerName: 0.4,
  contents: 0.4,
  business: 0.3,
  unitKind: 0.2,
  medicine: 0.2,
};
const speech = (role: ColumnRole | undefined): number => SPEAKS[role ?? 'ignore'] ?? -0.4;

/**
 * Gives a ragged row as many cells as there are columns, where they fit best by what they look like.
 *
 * Too many cells: a message or an address held the delimiter. Too few: blanks at the end were left
 * out, or one in the middle.
 */
export function alignRow(cells: readonly string[], map: ColumnMap, delimiter: string): AlignedRow {
  const roles = map.columns.map(({ role }) => role);
  const width = roles.length;
  let row = cells;
  while (row.length > width && (row[row.length - 1] ?? '').trim() === '') row = row.slice(0, -1);
  if (row.length === width) return { cells: row, mended: null };
  const seen = new Map<string, number>();
  const score = (candidate: readonly string[]): number =>
    candidate.reduce((sum, cell, i) => {
      const role = roles[i] ?? 'ignore';
      const key = `${role}\u0000${cell}`;
      const known = seen.get(key) ?? fit(role, cell);
      seen.set(key, known);
      return sum + known;
    }, 0);

  if (row.length < width) {
    const missing = width - row.length;
    const padded = [...row, ...blanks(missing)];
    let best = padded;
    // Blanks at the end are what services leave out; anything else has to look clearly better.
    let bestScore = score(padded) + 0.9;
    for (let at = 0; at < row.length; at++) {
      const candidate = [...row.slice(0, at), ...blanks(missing), ...row.slice(at)];
      const value = score(candidate);
      if (value > bestScore) [best, bestScore] = [candidate, value];
    }
    return {
      cells: best,
      mended: best === padded ? null : 'the row had too few cells; blanks were put where they fit',
    };
  }

  const extra = row.length - width;
  let best = mergeAt(row, width - 1, extra, delimiter);
  let bestScore = score(best) + speech(roles[width - 1]);
  for (let at = 0; at < width; at++) {
    const candidate = mergeAt(row, at, extra, delimiter);
    const value = score(candidate) + speech(roles[at]);
    if (value > bestScore) [best, bestScore] = [candidate, value];
  }
  // "Ashgrove, Wren" and a message with a comma in one row
  for (let split = 1; split < extra && extra <= 6; split++) {
    for (let at = 0; at < width; at++) {
      const once = mergeAt(row, at, split, delimiter);
      for (let later = at + 1; later < width; later++) {
        const candidate = mergeAt(once, later, extra - split, delimiter);
        // Two slips in a row are rarer than one, so both have to be likely.
        const value = score(candidate) + (speech(roles[at]) + speech(roles[later])) / 2 - 0.3;
        if (value > bestScore) [best, bestScore] = [candidate, value];
      }
    }
  }
  return {
    cells: best,
    mended: 'the row had too many cells; those that belong together were joined',
  };
}

function mergeAt(row: readonly string[], at: number, extra: number, delimiter: string): string[] {
  const glue = delimiter === '\t' ? ' ' : `${delimiter}`;
  const merged = row.slice(at, at + extra + 1).join(glue);
  return [...row.slice(0, at), merged, ...row.slice(at + extra + 1)];
}

const blanks = (count: number): string[] => Array.from({ length: count }, () => '');
