import type { Circuits } from './circuits';
import type { StreetGraph } from './junctions';
import { distance, type Point } from './plane';
import { HALF_HEIGHT, HALF_WIDTH } from './terrain';

// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { floor, ceil, max, min, round } = Math;

export const CELL = 50;
const SMOOTHING_PASSES = 4;
export const COLUMNS = round((2 * HALF_WIDTH) / CELL);
export const ROWS = round((2 * HALF_HEIGHT) / CELL);

/** Cells of a square lattice over the county; each holds a feeder's number, or -1 in the sea. */
export type Territory = Int16Array;

export const cellAt = ([x, y]: Point): number =>
  floor((y + HALF_HEIGHT) / CELL) * COLUMNS + floor((x + HALF_WIDTH) / CELL);

/** All land, each piece of it with the feeder whose street is nearest. */
export function territoryOf(
  graph: StreetGraph,
  { feederOf }: Circuits,
  coast: readonly Point[][],
): Territory {
  const isLand = landCells(coast);
  const cells = new Int16Array(COLUMNS * ROWS).fill(-1);
  const isStreet = new Uint8Array(cells.length);
  for (const { from, to, points } of graph.stretches) {
    // A block between two feeders is served from both ends.
    for (const [p, share] of alongStretch(points, CELL / 3)) {
      const k = cellAt(p);
      isStreet[k] = 1;
      cells[k] = feederOf[share < 0.5 ? from : to]!;
    }
  }
  spreadOut(cells);
  for (let k = 0; k < cells.length; k++) if (!isLand[k]) cells[k] = -1;
  for (let pass = 0; pass < SMOOTHING_PASSES; pass++) smoothBorders(cells);
  joinParts(cells, isStreet);
  mendCorners(cells);
  return cells;
}

function* alongStretch(points: readonly Point[], step: number): Generator<[Point, number]> {
  let total = 0;
  for (let i = 1; i < points.length; i++) total += distance(points[i - 1]!, points[i]!);
  let way = 0;
  for (let i = 1; i < points.length; i++) {
    const [a, b] = [points[i - 1]!, points[i]!];
    const span = distance(a, b);
    const steps = max(1, ceil(span / step));
    for (let s = 0; s <= steps; s++) {
      const share = s / steps;
      yield [
        [a[0] + (b[0] - a[0]) * share, a[1] + (b[1] - a[1]) * share],
        (way + span * share) / total,
      ];
    }
    way += span;
  }
}

/** Cells whose middle lies inside the coast, row by row (even-odd rule). */
function landCells(coast: readonly Point[][]): Uint8Array {
  const isLand = new Uint8Array(COLUMNS * ROWS);
  const crossings: number[][] = Array.from({ length: ROWS }, () => []);
  for (const ring of coast) {
    for (let i = 1; i < ring.length; i++) {
      const [a, b] = [ring[i - 1]!, ring[i]!];
      const [low, high] = a[1] < b[1] ? [a, b] : [b, a];
      const first = max(0, ceil((low[1] + HALF_HEIGHT) / CELL - 0.5));
      for (let j = first; j < ROWS; j++) {
        const y = (j + 0.5) * CELL - HALF_HEIGHT;
        if (y >= high[1]) break;
        crossings[j]!.push(low[0] + ((high[0] - low[0]) * (y - low[1])) / (high[1] - low[1]));
      }
    }
  }
  crossings.forEach((xs, j) => {
    xs.sort((a, b) => a - b);
    for (let i = 1; i < xs.length; i += 2) {
      const from = max(0, ceil((xs[i - 1]! + HALF_WIDTH) / CELL - 0.5));
      const to = min(COLUMNS - 1, floor((xs[i]! + HALF_WIDTH) / CELL - 0.5));
      for (let k = from; k <= to; k++) isLand[j * COLUMNS + k] = 1;
    }
  });
  return isLand;
}

/** Gives every cell the label of the nearest cell that has one, by handing offsets on in two sweeps (Danielsson's method). */
function spreadOut(cells: Territory): void {
  const far = 20_000;
  const dx = new Int16Array(cells.length);
  const dy = new Int16Array(cells.length);
  for (let k = 0; k < cells.length; k++) if (cells[k]! < 0) dx[k] = dy[k] = far;
  const take = (k: number, from: number, stepX: number, stepY: number): void => {
    if (dx[from] === far) return;
    const x = dx[from]! + stepX;
    const y = dy[from]! + stepY;
    if (dx[k] === far || x * x + y * y < dx[k]! * dx[k]! + dy[k]! * dy[k]!) {
      dx[k] = x;
      dy[k] = y;
      cells[k] = cells[from]!;
    }
  };
  const sweep = (j: number, back: -1 | 1): void => {
    const before = j + back;
    const hasRow = before >= 0 && before < ROWS;
    for (let i = 0; i < COLUMNS; i++) {
      const k = j * COLUMNS + i;
      if (hasRow) {
        take(k, before * COLUMNS + i, 0, back);
        if (i > 0) take(k, before * COLUMNS + i - 1, -1, back);
        if (i < COLUMNS - 1) take(k, before * COLUMNS + i + 1, 1, back);
      }
      if (i > 0) take(k, k - 1, -1, 0);
    }
    for (let i = COLUMNS - 2; i >= 0; i--) take(j * COLUMNS + i, j * COLUMNS + i + 1, 1, 0);
  };
  for (let j = 0; j < ROWS; j++) sweep(j, -1);
  for (let j = ROWS - 1; j >= 0; j--) sweep(j, 1);
}

/** Borders run straight where many land cells agree; a power company's map shows no cogs. */
function smoothBorders(cells: Territory): void {
  const before = cells.slice();
  const votes = new Uint8Array(256);
  for (let j = 2; j < ROWS - 2; j++) {
    for (let i = 2; i < COLUMNS - 2; i++) {
      const k = j * COLUMNS + i;
      const own = before[k]!;
      if (own < 0) continue;
      const isInner = [k - 1, k + 1, k - COLUMNS, k + COLUMNS].every(
        (near) => before[near] === own,
      );
      if (isInner) continue;
      let best = own;
      votes.fill(0);
      for (let dj = -2; dj <= 2; dj++) {
        for (let di = -2; di <= 2; di++) {
          const label = before[k + dj * COLUMNS + di]!;
          if (label >= 0 && ++votes[label]! > votes[best]!) best = label;
        }
      }
      cells[k] = best;
    }
  }
}

const around = (k: number): number[] => {
  const i = k % COLUMNS;
  const near: number[] = [];
  if (i > 0) near.push(k - 1);
  if (i < COLUMNS - 1) near.push(k + 1);
  if (k >= COLUMNS) near.push(k - COLUMNS);
  if (k < COLUMNS * (ROWS - 1)) near.push(k + COLUMNS);
  return near;
};

/**
 * A feeder's lesser parts go to the neighbour that they touch most. A part that touches none is an
 * island: it stays with its feeder if it has a street, and has no power otherwise.
 */
function joinParts(cells: Territory, isStreet: Uint8Array): void {
  for (let pass = 0; pass < 4; pass++) {
    const parts = partsOf(cells);
    const largest = new Map<number, number>();
    for (const { label, cells: own } of parts)
      largest.set(label, max(largest.get(label) ?? 0, own.length));
    let changed = false;
    for (const { label, cells: own } of parts) {
      if (own.length === largest.get(label)) continue;
      const touching = new Map<number, number>();
      for (const k of own)
        for (const next of around(k)) {
          const other = cells[next]!;
          if (other >= 0 && other !== label) touching.set(other, (touching.get(other) ?? 0) + 1);
        }
      const [best] = [...touching].sort((a, b) => b[1] - a[1] || a[0] - b[0]);
      if (!best && own.some((k) => isStreet[k])) continue;
      for (const k of own) cells[k] = best ? best[0] : -1;
      changed = true;
    }
    if (!changed) return;
  }
}

function partsOf(cells: Territory): { label: number; cells: number[] }[] {
  const seen = new Uint8Array(cells.length);
  const parts: { label: number; cells: number[] }[] = [];
  for (let start = 0; start < cells.length; start++) {
    const label = cells[start]!;
    if (label < 0 || seen[start]) continue;
    const own = [start];
    seen[start] = 1;
    for (let at = 0; at < own.length; at++) {
      for (const next of around(own[at]!)) {
        if (seen[next] || cells[next] !== label) continue;
        seen[next] = 1;
        own.push(next);
      }
    }
    parts.push({ label, cells: own });
  }
  return parts;
}

/** Where a label meets itself only at a corner, its outline would touch itself there. */
function mendCorners(cells: Territory): void {
  for (let pass = 0; pass < 6; pass++) {
    let changed = false;
    for (let j = 0; j < ROWS - 1; j++) {
      for (let i = 0; i < COLUMNS - 1; i++) {
        const sw = j * COLUMNS + i;
        const [se, nw, ne] = [sw + 1, sw + COLUMNS, sw + COLUMNS + 1];
        if (cells[sw] === cells[ne] && cells[se] !== cells[sw] && cells[nw] !== cells[sw]) {
          cells[cells[sw]! < 0 ? sw : se] = cells[sw]! < 0 ? cells[se]! : cells[sw]!;
          changed = true;
        } else if (cells[se] === cells[nw] && cells[sw] !== cells[se] && cells[ne] !== cells[se]) {
          cells[cells[se]! < 0 ? se : sw] = cells[se]! < 0 ? cells[sw]! : cells[se]!;
          changed = true;
        }
      }
    }
    if (!changed) return;
  }
}
