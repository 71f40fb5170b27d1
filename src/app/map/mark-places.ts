import type { DrawnMark, Press } from './call-mark';
import { scaleAt } from './world';

/** A call's mark as it stands at one zoom. */
export interface PlacedMark<Mark extends DrawnMark = DrawnMark> {
  readonly mark: Mark;
  /** With shape and letter; without it is a dot, because a more urgent one needs the room. */
  readonly isFull: boolean;
  /** How many calls stand in this very place, this one among them. */
  readonly count: number;
}

/** Half the size of a full mark in CSS pixels: what presses more is larger. */
export const MARK_RADIUS: Readonly<Record<Press, number>> = {
  now: 11,
  soon: 9.5,
  later: 8,
  none: 6.5,
};

/** Far out, full marks keep more distance, or the map would be a wall of them. */
const SPACING: readonly (readonly [zoom: number, times: number])[] = [
  [10, 1.75],
  [11, 1.6],
  [12, 1.4],
  [13, 1.15],
  [14, 0.95],
];

const spacingAt = (zoom: number): number => SPACING.find(([upTo]) => zoom <= upTo)?.[1] ?? 0.8;

/** About six metres: one house with several calls. */
const SAME_PLACE = 1 / 2 ** 22.6;

/**
 * Decides which calls get a full mark at a zoom: in the order of the queue, each that finds room
 * beside those before it. It looks at the whole county and not at the window, so nothing changes
 * while the map is moved.
 *
 * @returns the marks in the order in which they were given
 */
export function placeMarks<Mark extends DrawnMark>(
  marks: readonly Mark[],
  zoom: number,
): PlacedMark<Mark>[] {
  const scale = scaleAt(zoom);
  const spacing = spacingAt(zoom);
  const cell = 2 * MARK_RADIUS.now * spacing;
  const grid = new Map<number, DrawnMark[]>();
  const houses = countHouses(marks);
  const placed: PlacedMark<Mark>[] = [];

  for (const mark of marks) {
    const column = Math.floor((mark.x * scale) / cell);
    const row = Math.floor((mark.y * scale) / cell);
    const isFull = hasRoom(mark, grid, column, row, scale, spacing);
    if (isFull) {
      const key = cellKey(column, row);
      const there = grid.get(key);
      if (there) there.push(mark);
      else grid.set(key, [mark]);
    }
    placed.push({ mark, isFull, count: houses.get(houseKey(mark)) ?? 1 });
  }
  return placed;
}

const EMPTY_CELL: readonly DrawnMark[] = [];

function hasRoom(
  mark: DrawnMark,
  grid: ReadonlyMap<number, readonly DrawnMark[]>,
  column: number,
  row: number,
  scale: number,
  spacing: number,
): boolean {
  for (let dx = -1; dx <= 1; dx++) {
    for (let dy = -1; dy <= 1; dy++) {
      for (const other of grid.get(cellKey(column + dx, row + dy)) ?? EMPTY_CELL) {
        const reach = (MARK_RADIUS[mark.press] + MARK_RADIUS[other.press]) * spacing;
        const x = (mark.x - other.x) * scale;
        const y = (mark.y - other.y) * scale;
        if (x * x + y * y < reach * reach) return false;
      }
    }
  }
  return true;
}

/** Cells reach to 2^26 at the closest zoom, so a pair of them is one exact whole number. */
const cellKey = (column: number, row: number): number => column * 2 ** 26 + row;

const houseKey = ({ x, y }: DrawnMark): number =>
  Math.round(x / SAME_PLACE) * 2 ** 26 + Math.round(y / SAME_PLACE);

function countHouses(marks: readonly DrawnMark[]): ReadonlyMap<number, number> {
  const counts = new Map<number, number>();
  for (const mark of marks) {
    const key = houseKey(mark);
    counts.set(key, (counts.get(key) ?? 0) + 1);
  }
  return counts;
}

/** Half the size of a dot, in CSS pixels. */
export function dotRadius(press: Press, zoom: number): number {
  const base = zoom <= 10 ? 1.6 : zoom <= 11 ? 2 : zoom <= 12 ? 2.5 : zoom <= 13 ? 3 : 3.5;
  return press === 'now' || press === 'soon' ? base + 0.8 : base;
}

/**
 * The calls under a finger or a pointer: the nearest first, with all that stand in its place.
 *
 * @param x,y the pointer in CSS pixels of the whole world at this zoom
 * @param slack how far beside a mark still counts, in CSS pixels
 */
export function marksAt<Mark extends DrawnMark>(
  placed: readonly PlacedMark<Mark>[],
  zoom: number,
  { x, y }: { readonly x: number; readonly y: number },
  slack: number,
): PlacedMark<Mark>[] {
  const scale = scaleAt(zoom);
  const near: { readonly one: PlacedMark<Mark>; readonly beside: number }[] = [];
  for (const one of placed) {
    const radius = one.isFull ? MARK_RADIUS[one.mark.press] : dotRadius(one.mark.press, zoom);
    const beside = Math.hypot(one.mark.x * scale - x, one.mark.y * scale - y) - radius;
    // A full mark lies on top of the dots around it.
    if (beside <= slack) near.push({ one, beside: one.isFull ? beside - slack : beside });
  }
  return near.sort((a, b) => a.beside - b.beside).map(({ one }) => one);
}
