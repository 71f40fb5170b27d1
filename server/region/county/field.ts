import type { Point } from './plane';

// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { floor, sqrt } = Math;

/** Numbers on a square lattice. */
export interface Field {
  readonly columns: number;
  readonly rows: number;
  /** Metres between neighbours. */
  readonly cell: number;
  readonly left: number;
  readonly bottom: number;
  /** Row by row from the south-west. Above zero is land. */
  readonly values: Float64Array;
}

/**
 * Distance in metres to the nearest cell that is not above zero, by two sweeps that hand the
 * offset to the nearest wet cell from neighbour to neighbour (Danielsson's method), read with
 * bilinear interpolation.
 */
export function distanceField({
  columns,
  rows,
  cell,
  left,
  bottom,
  values,
}: Field): (p: Point) => number {
  const far = 30_000;
  const dx = new Int16Array(values.length).fill(far);
  const dy = new Int16Array(values.length).fill(far);
  for (let k = 0; k < values.length; k++) if (values[k]! <= 0) dx[k] = dy[k] = 0;

  const square = (x: number, y: number): number => x * x + y * y;
  const take = (k: number, from: number, stepX: number, stepY: number): void => {
    if (dx[from] === far) return;
    const x = dx[from]! + stepX;
    const y = dy[from]! + stepY;
    if (dx[k] === far || square(x, y) < square(dx[k]!, dy[k]!)) {
      dx[k] = x;
      dy[k] = y;
    }
  };
  for (let j = 0; j < rows; j++) {
    for (let i = 0; i < columns; i++) {
      const k = j * columns + i;
      if (i > 0) take(k, k - 1, 1, 0);
      if (j > 0) take(k, k - columns, 0, 1);
      if (i > 0 && j > 0) take(k, k - columns - 1, 1, 1);
      if (i < columns - 1 && j > 0) take(k, k - columns + 1, -1, 1);
    }
    for (let i = columns - 2; i >= 0; i--) take(j * columns + i, j * columns + i + 1, -1, 0);
  }
  for (let j = rows - 1; j >= 0; j--) {
    for (let i = columns - 1; i >= 0; i--) {
      const k = j * columns + i;
      if (i < columns - 1) take(k, k + 1, -1, 0);
      if (j < rows - 1) take(k, k + columns, 0, -1);
      if (i < columns - 1 && j < rows - 1) take(k, k + columns + 1, -1, -1);
      if (i > 0 && j < rows - 1) take(k, k + columns - 1, 1, -1);
    }
    for (let i = 1; i < columns; i++) take(j * columns + i, j * columns + i - 1, 1, 0);
  }
  const distances = new Float32Array(values.length);
  for (let k = 0; k < values.length; k++) distances[k] = sqrt(square(dx[k]!, dy[k]!)) * cell;

  return ([x, y]) => {
    const fi = (x - left) / cell;
    const fj = (y - bottom) / cell;
    const i = floor(fi);
    const j = floor(fj);
    if (i < 0 || j < 0 || i >= columns - 1 || j >= rows - 1) return 0;
    const u = fi - i;
    const v = fj - j;
    const k = j * columns + i;
    return (
      (distances[k]! * (1 - u) + distances[k + 1]! * u) * (1 - v) +
      (distances[k + columns]! * (1 - u) + distances[k + columns + 1]! * u) * v
    );
  };
}
