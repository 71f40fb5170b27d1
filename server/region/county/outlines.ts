import { rounded, simplified, type Point } from './plane';
import { CELL, COLUMNS, ROWS, type Territory } from './territory';
import { HALF_HEIGHT, HALF_WIDTH } from './terrain';

/** Outlines stray from their cells' edges by no more than this, in metres: less than a cell. */
const TOLERANCE = 42;
/** Corners of cells are counted row by row from the south-west. */
const ACROSS = COLUMNS + 1;

/** Closed rings with the label on their left: outlines run counter-clockwise, holes clockwise. */
export type Rings = readonly (readonly Point[])[];

/**
 * The outlines of every label from 0 up. Neighbours share the very same points along their border,
 * so that together they cover the land without a gap and without overlap.
 */
export function outlinesOf(cells: Territory, count: number): Rings[] {
  const labelAt = (i: number, j: number): number =>
    i < 0 || j < 0 || i >= COLUMNS || j >= ROWS ? -1 : cells[j * COLUMNS + i]!;
  // By label: from each corner on the outline to the next.
  const next = Array.from({ length: count }, () => new Map<number, number>());
  const sides = new Uint8Array(ACROSS * (ROWS + 1));
  for (let j = 0; j < ROWS; j++) {
    for (let i = 0; i < COLUMNS; i++) {
      const label = labelAt(i, j);
      if (label < 0) continue;
      const sw = j * ACROSS + i;
      const [se, nw, ne] = [sw + 1, sw + ACROSS, sw + ACROSS + 1];
      for (const [other, from, to] of [
        [labelAt(i, j - 1), sw, se],
        [labelAt(i + 1, j), se, ne],
        [labelAt(i, j + 1), ne, nw],
        [labelAt(i - 1, j), nw, sw],
      ] as const) {
        if (other === label) continue;
        next[label]!.set(from, to);
        // A border between two labels is met from both sides; the lesser label counts it.
        if (other < 0 || label < other) {
          sides[from]!++;
          sides[to]!++;
        }
      }
    }
  }
  return next.map((own) => {
    const rings: Point[][] = [];
    for (const start of own.keys()) {
      if (!own.has(start)) continue;
      const ring = [start];
      for (let at = own.get(start)!; ; at = own.get(at)!) {
        ring.push(at);
        own.delete(ring[ring.length - 2]!);
        if (at === start) break;
      }
      const smooth = ringOf(ring, sides);
      if (smooth.length >= 4) rings.push(smooth);
    }
    return rings;
  });
}

/** Cuts a ring where three outlines meet, and draws each piece as its neighbour does. */
function ringOf(ring: readonly number[], sides: Uint8Array): Point[] {
  const corners = ring.slice(0, -1);
  const knots = corners.flatMap((corner, i) => (sides[corner]! > 2 ? [i] : []));
  if (knots.length === 0) {
    // Whoever draws this ring begins at the same corner.
    const first = corners.indexOf(Math.min(...corners));
    return drawn([...corners.slice(first), ...corners.slice(0, first), corners[first]!]);
  }
  const points: Point[] = [];
  knots.forEach((from, k) => {
    const to = knots[(k + 1) % knots.length]!;
    const piece =
      to > from
        ? corners.slice(from, to + 1)
        : [...corners.slice(from), ...corners.slice(0, to + 1)];
    points.push(...drawn(piece).slice(0, -1));
  });
  return [...points, points[0]!];
}

/** The same points for a piece and for its reverse. */
function drawn(corners: readonly number[]): Point[] {
  const [first, second] = [corners[0]!, corners[1]!];
  const [last, beforeLast] = [corners[corners.length - 1]!, corners[corners.length - 2]!];
  const isTurned = last < first || (last === first && beforeLast < second);
  const line = (isTurned ? [...corners].reverse() : corners).map(place);
  const points = rounded(simplified(line, TOLERANCE), 1, false);
  return isTurned ? points.reverse() : points;
}

const place = (corner: number): Point => {
  const i = corner % ACROSS;
  const j = (corner - i) / ACROSS;
  return [i * CELL - HALF_WIDTH, j * CELL - HALF_HEIGHT];
};
