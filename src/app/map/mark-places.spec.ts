/** @jest-environment node */
import { aCallRow, NOW } from '../core/testing';
import { DEFAULT_WEIGHING, rankedCall } from '../core/ranking';
import { type CallMark, callMark } from './call-mark';
import { dotRadius, MARK_RADIUS, marksAt, placeMarks } from './mark-places';
import { scaleAt } from './world';

const ZOOM = 15;
/** Degrees of longitude for so many pixels at the zoom of these tests. */
const degrees = (px: number, zoom = ZOOM): number => (px * 360) / scaleAt(zoom);

function aMark(n: number, lon: number, lat = 34): CallMark {
  const call = aCallRow(n, {
    address: { text: '', unitNo: '', lonLat: [lon, lat], kind: 'rooftop' },
  });
  const mark = callMark(rankedCall(call, NOW, DEFAULT_WEIGHING), NOW);
  if (!mark) throw new Error('The call has a place.');
  return mark;
}

describe('placeMarks', () => {
  it('gives room to the more urgent of two calls that are too close', () => {
    const placed = placeMarks([aMark(1, -40), aMark(2, -40 + degrees(8))], ZOOM);
    expect(placed.map((one) => one.isFull)).toEqual([true, false]);
  });

  it('gives a full mark to both when they are far enough apart', () => {
    const placed = placeMarks([aMark(1, -40), aMark(2, -40 + degrees(40))], ZOOM);
    expect(placed.map((one) => one.isFull)).toEqual([true, true]);
  });

  it('shows more of the same calls the closer one comes', () => {
    const marks = Array.from({ length: 200 }, (_, i) =>
      aMark(i + 1, -40 + ((i * 7919) % 200) / 2000, 34 + ((i * 104_729) % 200) / 2000),
    );
    const full = [10, 12, 14, 16].map(
      (zoom) => placeMarks(marks, zoom).filter((one) => one.isFull).length,
    );
    expect(full).toEqual([...full].sort((a, b) => a - b));
    expect(full[0]).toBeLessThan(60);
    expect(full.at(-1)).toBeGreaterThan(180);
  });

  it('never lets two full marks of one zoom overlap, wherever the cells of its grid lie', () => {
    let seed = 1;
    const random = (): number => (seed = (seed * 16_807) % 2_147_483_647) / 2_147_483_647;
    const marks = Array.from({ length: 600 }, (_, i) =>
      aMark(i + 1, -40 + random() * degrees(500), 34 + random() * degrees(400)),
    );
    const scale = scaleAt(ZOOM);
    const full = placeMarks(marks, ZOOM).filter((one) => one.isFull);
    for (const [i, { mark: a }] of full.entries()) {
      for (const { mark: b } of full.slice(i + 1)) {
        const apart = Math.hypot(a.x - b.x, a.y - b.y) * scale;
        expect(apart).toBeGreaterThanOrEqual((MARK_RADIUS[a.press] + MARK_RADIUS[b.press]) * 0.79);
      }
    }
    expect(full.length).toBeGreaterThan(100);
  });

  it('counts the calls of one house', () => {
    const placed = placeMarks([aMark(1, -40), aMark(2, -40), aMark(3, -40.01)], ZOOM);
    expect(placed.map(({ count }) => count)).toEqual([2, 2, 1]);
  });
});

describe('marksAt', () => {
  const at = (mark: CallMark, dx = 0) => ({
    x: mark.x * scaleAt(ZOOM) + dx,
    y: mark.y * scaleAt(ZOOM),
  });

  it('finds a mark on its rim and not beyond the slack', () => {
    const mark = aMark(1, -40);
    const placed = placeMarks([mark], ZOOM);
    const radius = MARK_RADIUS[mark.press];
    expect(marksAt(placed, ZOOM, at(mark, radius + 2), 3)).toHaveLength(1);
    expect(marksAt(placed, ZOOM, at(mark, radius + 4), 3)).toHaveLength(0);
  });

  it('names the full mark before the dot beside it', () => {
    const [urgent, other] = [aMark(1, -40), aMark(2, -40 + degrees(8))];
    const placed = placeMarks([urgent, other], ZOOM);
    const found = marksAt(placed, ZOOM, at(other, -2), 3);
    expect(found.map(({ mark }) => mark.call.number)).toEqual([1, 2]);
  });

  it('names all calls of one house', () => {
    const marks = [aMark(1, -40), aMark(2, -40), aMark(3, -40)];
    const placed = placeMarks(marks, ZOOM);
    expect(marksAt(placed, ZOOM, at(marks[0]!), 3)).toHaveLength(3);
  });
});

describe('dotRadius', () => {
  it('grows towards the ground and is larger for what presses', () => {
    expect(dotRadius('later', 10)).toBeLessThan(dotRadius('later', 14));
    expect(dotRadius('now', 12)).toBeGreaterThan(dotRadius('later', 12));
  });
});
