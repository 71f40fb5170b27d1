import { placeLabel, widestSpan } from './area-labels';
import { LabelBoxes } from './label-boxes';

const WINDOW = { left: 0, top: 0, right: 400, bottom: 300 };
const box = (left: number, top: number, right: number, bottom: number) => [
  { x: left, y: top },
  { x: right, y: top },
  { x: right, y: bottom },
  { x: left, y: bottom },
];

describe('widestSpan', () => {
  it('is the wider of two arms of an outline', () => {
    // A U with a narrow left arm and a wide right one.
    const shape = [
      [10, 10],
      [40, 10],
      [40, 200],
      [100, 200],
      [100, 10],
      [300, 10],
      [300, 250],
      [10, 250],
    ].map(([x = 0, y = 0]) => ({ x, y }));
    expect(widestSpan([shape], 100, WINDOW)).toEqual({ left: 100, right: 300 });
    expect(widestSpan([shape], 220, WINDOW)).toEqual({ left: 10, right: 300 });
  });

  it('leaves out a hole', () => {
    const ring = [box(10, 10, 310, 210), box(40, 40, 140, 180)];
    expect(widestSpan(ring, 100, WINDOW)).toEqual({ left: 140, right: 310 });
    expect(widestSpan(ring, 20, WINDOW)).toEqual({ left: 10, right: 310 });
  });

  it('ends at the window and is none beside the outline', () => {
    expect(widestSpan([box(-500, 0, 900, 300)], 50, WINDOW)).toEqual({ left: 6, right: 394 });
    expect(widestSpan([box(10, 10, 50, 50)], 60, WINDOW)).toBeNull();
  });
});

describe('placeLabel', () => {
  it('stands inside the area with its times when they fit', () => {
    const label = placeLabel([box(50, 40, 350, 200)], WINDOW, 60, 140, new LabelBoxes());
    expect(label).toMatchObject({ hasTimes: true, box: { x: 130, y: 46, width: 140 } });
  });

  it('goes down until the outline is wide enough', () => {
    const peak = [
      { x: 200, y: 20 },
      { x: 390, y: 280 },
      { x: 10, y: 280 },
    ];
    const label = placeLabel([peak], WINDOW, 60, 140, new LabelBoxes());
    expect(label?.hasTimes).toBe(true);
    const { box: at } = label!;
    // As wide as the label at its upper edge, where the peak is narrowest.
    const span = widestSpan([peak], at.y, WINDOW)!;
    expect(span.right - span.left).toBeGreaterThanOrEqual(at.width);
  });

  it('leaves out the times, then stands above a small area', () => {
    const narrow = placeLabel([box(50, 40, 150, 200)], WINDOW, 60, 140, new LabelBoxes());
    expect(narrow).toMatchObject({ hasTimes: false, box: { width: 60, y: 46 } });
    const small = placeLabel([box(50, 40, 80, 60)], WINDOW, 60, 140, new LabelBoxes());
    expect(small).toMatchObject({ hasTimes: false, box: { y: 21 } });
  });

  it('is none for an area out of the window', () => {
    expect(placeLabel([box(500, 40, 700, 60)], WINDOW, 60, 140, new LabelBoxes())).toBeNull();
  });
});
