import { rounded, simplified, type Point } from './plane';
import type { Field } from './field';

/**
 * The closed lines at which a field crosses a level, with the higher side on their left
 * (marching squares). Lines of fewer than `smallest` crossings are left out. The field must be
 * lower than the level all along its border.
 */
export function contours(field: Field, level: number, smallest: number): Point[][] {
  const { columns, rows, cell, left, bottom, values } = field;
  // An edge of the lattice is named by the cell at its lower left and whether it points north.
  const eastEdge = (i: number, j: number): number => (j * columns + i) * 2;
  const northEdge = (i: number, j: number): number => (j * columns + i) * 2 + 1;
  const next = new Map<number, number>();

  for (let j = 0; j < rows - 1; j++) {
    for (let i = 0; i < columns - 1; i++) {
      const k = j * columns + i;
      const sw = values[k]! > level;
      const se = values[k + 1]! > level;
      const nw = values[k + columns]! > level;
      const ne = values[k + columns + 1]! > level;
      const code = (sw ? 1 : 0) | (se ? 2 : 0) | (ne ? 4 : 0) | (nw ? 8 : 0);
      if (code === 0 || code === 15) continue;
      const south = eastEdge(i, j);
      const north = eastEdge(i, j + 1);
      const west = northEdge(i, j);
      const east = northEdge(i + 1, j);
      for (const [from, to] of STEPS[code]!) {
        const edges = { south, north, west, east };
        next.set(edges[from], edges[to]);
      }
    }
  }

  const place = (edge: number): Point => {
    const k = edge >> 1;
    const i = k % columns;
    const j = (k - i) / columns;
    const other = edge & 1 ? k + columns : k + 1;
    const share = (level - values[k]!) / (values[other]! - values[k]!);
    return edge & 1
      ? [left + i * cell, bottom + (j + share) * cell]
      : [left + (i + share) * cell, bottom + j * cell];
  };

  const rings: Point[][] = [];
  for (const start of [...next.keys()]) {
    if (!next.has(start)) continue;
    const ring: Point[] = [];
    let edge: number | undefined = start;
    while (edge !== undefined && next.has(edge)) {
      ring.push(place(edge));
      const following: number = next.get(edge)!;
      next.delete(edge);
      edge = following;
    }
    if (ring.length < smallest) continue;
    ring.push(ring[0]!);
    rings.push(simplified(rounded(ring, 2, true), 1.5));
  }
  return rings;
}

type Side = 'south' | 'north' | 'west' | 'east';

/** For each pattern of high corners (sw 1, se 2, ne 4, nw 8): from which side to which, high side on the left. */
const STEPS: Readonly<Record<number, readonly (readonly [Side, Side])[]>> = {
  1: [['south', 'west']],
  2: [['east', 'south']],
  3: [['east', 'west']],
  4: [['north', 'east']],
  5: [
    ['south', 'east'],
    ['north', 'west'],
  ],
  6: [['north', 'south']],
  7: [['north', 'west']],
  8: [['west', 'north']],
  9: [['south', 'north']],
  10: [
    ['west', 'south'],
    ['east', 'north'],
  ],
  11: [['east', 'north']],
  12: [['west', 'east']],
  13: [['south', 'east']],
  14: [['west', 'south']],
};
