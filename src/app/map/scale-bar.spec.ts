/** @jest-environment node */
import { scaleBar } from './scale-bar';

describe('scaleBar', () => {
  it.each([
    [611.5, '30 mi'],
    [38.2, '2 mi'],
    [9.55, '3000 ft'],
    [1.19, '300 ft'],
  ])('is a round length for %s metres a pixel: %s', (metres, words) => {
    expect(scaleBar(metres).words).toBe(words);
  });

  it('is as long as it says, to the pixel', () => {
    const { words, widthPx } = scaleBar(38.2);
    expect(words).toBe('2 mi');
    // 2 mi are 3,218.7 m.
    expect(widthPx).toBe(Math.round(3218.69 / 38.2));
  });
});
