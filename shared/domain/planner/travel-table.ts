import { MalformedProblem } from './malformed-problem';
import type { PlanProblem } from './problem';

/** The problem's drives as one flat table. */
export function flatMatrix({ matrix, locations }: PlanProblem): Float64Array {
  const flat = isNested(matrix)
    ? flattened(matrix, locations)
    : matrix instanceof Float64Array
      ? matrix
      : new Float64Array(matrix);
  if (flat.length !== locations * locations) {
    throw new MalformedProblem(
      `${locations} places need ${locations ** 2} drives, not ${flat.length}.`,
    );
  }
  // A plain loop: a callback for each of a million drives costs more than the check.
  for (let i = 0; i < flat.length; i++) {
    if (!(flat[i]! >= 0 && flat[i]! < Infinity)) {
      throw new MalformedProblem(`Drive ${i} takes ${flat[i]} seconds.`);
    }
  }
  return flat;
}

function isNested(matrix: PlanProblem['matrix']): matrix is readonly ArrayLike<number>[] {
  return typeof matrix[0] === 'object';
}

function flattened(rows: readonly ArrayLike<number>[], locations: number): Float64Array {
  const flat = new Float64Array(locations * locations);
  const isSquare = rows.length === locations && rows.every((row) => row.length === locations);
  if (!isSquare) throw new MalformedProblem(`The drives are not ${locations} rows of as many.`);
  rows.forEach((row, from) => flat.set(row, from * locations));
  return flat;
}

/** The transpose; a table that is its own transpose is kept. */
export function turned(table: Float64Array, size: number): Float64Array {
  if (isSymmetric(table, size)) return table;
  const result = new Float64Array(table.length);
  for (let top = 0; top < size; top += BLOCK) {
    for (let left = 0; left < size; left += BLOCK) {
      const bottom = Math.min(size, top + BLOCK);
      const right = Math.min(size, left + BLOCK);
      for (let from = top; from < bottom; from++) {
        for (let to = left; to < right; to++) result[to * size + from] = table[from * size + to]!;
      }
    }
  }
  return result;
}

/** Rows and columns of a piece of the table that fits into the cache together with its mirror image. */
const BLOCK = 32;

function isSymmetric(table: Float64Array, size: number): boolean {
  for (let top = 0; top < size; top += BLOCK) {
    for (let left = top; left < size; left += BLOCK) {
      const bottom = Math.min(size, top + BLOCK);
      const right = Math.min(size, left + BLOCK);
      for (let from = top; from < bottom; from++) {
        for (let to = Math.max(left, from + 1); to < right; to++) {
          if (table[from * size + to] !== table[to * size + from]) return false;
        }
      }
    }
  }
  return true;
}
