/** @jest-environment node */
import type { LonLat } from '@shared/contract/common';
import {
  addCorner,
  canClose,
  closed,
  crossesItself,
  EMPTY_OUTLINE,
  insertCorner,
  midpoints,
  MOST_CORNERS,
  moveCorner,
  type Outline,
  outlineOf,
  removeCorner,
  ringOf,
  select,
  selectNext,
} from './outline';

const SQUARE: readonly LonLat[] = [
  [0, 0],
  [2, 0],
  [2, 2],
  [0, 2],
];
const drawn = (corners: readonly LonLat[]): Outline =>
  corners.reduce((outline, corner) => addCorner(outline, corner), EMPTY_OUTLINE);

describe('an outline', () => {
  it('closes from three corners on, and repeats the first one for the server', () => {
    const two = drawn(SQUARE.slice(0, 2));
    expect(canClose(two)).toBe(false);
    expect(closed(two)).toBe(two);
    expect(ringOf(two)).toBeNull();
    expect(ringOf(closed(drawn(SQUARE)))).toEqual([...SQUARE, SQUARE[0]]);
  });

  it('becomes the same ring again that it was made from', () => {
    const ring: LonLat[] = [...SQUARE, [0, 0]];
    expect(ringOf(outlineOf(ring))).toEqual(ring);
  });

  it('takes no corner at its end once it is closed, nor more than the contract allows', () => {
    const square = closed(drawn(SQUARE));
    expect(addCorner(square, [9, 9])).toBe(square);
    const full = drawn(Array.from({ length: MOST_CORNERS }, (_, i): LonLat => [i / 1000, 0]));
    expect(addCorner(full, [9, 9])).toBe(full);
    expect(insertCorner(closed(full), 0, [9, 9]).corners).toHaveLength(MOST_CORNERS);
    expect(ringOf(full)).toHaveLength(500);
  });

  it('goes round its corners in both directions', () => {
    const square = closed(drawn(SQUARE));
    expect(selectNext(square, 1).selected).toBe(0);
    expect(selectNext(square, -1).selected).toBe(3);
    expect(selectNext(select(square, 3), 1).selected).toBe(0);
    expect(selectNext(select(square, 0), -1).selected).toBe(3);
    expect(select(square, 7).selected).toBeNull();
  });

  it('moves, adds and removes one corner and leaves the others', () => {
    const square = closed(drawn(SQUARE));
    expect(moveCorner(square, 2, [3, 3]).corners).toEqual([
      [0, 0],
      [2, 0],
      [3, 3],
      [0, 2],
    ]);
    const five = insertCorner(square, 3, [-1, 1]);
    expect(five.corners.at(-1)).toEqual([-1, 1]);
    expect(five.selected).toBe(4);
    expect(removeCorner(five, 4).corners).toEqual(SQUARE);
    expect(square.corners).toEqual(SQUARE);
  });

  it('keeps three corners once it is closed', () => {
    const triangle = closed(drawn(SQUARE.slice(0, 3)));
    expect(removeCorner(triangle, 0)).toBe(triangle);
  });

  it('offers the middle of every edge, the last one too', () => {
    expect(midpoints(closed(drawn(SQUARE)))).toEqual([
      [1, 0],
      [2, 1],
      [1, 2],
      [0, 1],
    ]);
    expect(midpoints(drawn(SQUARE))).toEqual([]);
  });
});

describe('an outline that crosses itself', () => {
  const bowTie: readonly LonLat[] = [
    [0, 0],
    [2, 2],
    [2, 0],
    [0, 2],
  ];

  it('is found when two edges cross', () => {
    expect(crossesItself(closed(drawn(bowTie)))).toBe(true);
  });

  it('is not seen in a plain outline, bent inwards or not', () => {
    expect(crossesItself(closed(drawn(SQUARE)))).toBe(false);
    const dented: readonly LonLat[] = [
      [0, 0],
      [2, 0],
      [1, 1],
      [2, 2],
      [0, 2],
    ];
    expect(crossesItself(closed(drawn(dented)))).toBe(false);
  });

  it('counts the closing edge only when the outline is closed', () => {
    // The last edge, from (1, -1) back to (0, 0), is the only one that meets another.
    const hook: readonly LonLat[] = [
      [0, 0],
      [2, 0],
      [2, 2],
      [-1, 2],
      [1, -1],
    ];
    expect(crossesItself(drawn(hook.slice(0, 4)))).toBe(false);
    const zigzag: readonly LonLat[] = [
      [0, 0],
      [4, 0],
      [4, 2],
      [2, -1],
    ];
    expect(crossesItself(drawn(zigzag))).toBe(true);
    const open: readonly LonLat[] = [
      [0, 0],
      [1, 1],
      [2, 0],
      [1, 2],
      [0.9, 0.5],
    ];
    expect(crossesItself(drawn(open.slice(0, 4)))).toBe(false);
  });

  it('is found when a corner lies on another edge', () => {
    const touching: readonly LonLat[] = [
      [0, 0],
      [4, 0],
      [4, 4],
      [2, 0],
      [0, 4],
    ];
    expect(crossesItself(closed(drawn(touching)))).toBe(true);
  });
});
