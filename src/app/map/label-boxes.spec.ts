/** @jest-environment node */
import { LabelBoxes } from './label-boxes';

describe('LabelBoxes', () => {
  const box = (x: number, y = 0) => ({ x, y, width: 10, height: 10 });

  it('gives a place once', () => {
    const boxes = new LabelBoxes();
    expect(boxes.take(box(0))).toBe(true);
    expect(boxes.take(box(9))).toBe(false);
    expect(boxes.take(box(10))).toBe(true);
  });

  it('gives the first place that is free, and none when there is none', () => {
    const boxes = new LabelBoxes();
    boxes.take(box(0));
    expect(boxes.takeFirst([box(5), box(0, 20)])).toEqual(box(0, 20));
    expect(boxes.takeFirst([box(5), box(2, 22)])).toBeNull();
  });

  it('gives nothing where something else stands, and lets such places overlap', () => {
    const boxes = new LabelBoxes();
    boxes.reserve(box(0));
    boxes.reserve(box(5));
    expect(boxes.take(box(12))).toBe(false);
    expect(boxes.take(box(15))).toBe(true);
  });
});
