/** @jest-environment node */
import type { AreaDto } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';
import { areaAt } from './area-at';

const anArea = (name: string, outAt: number, ring: LonLat[]): AreaDto => ({
  id: name,
  stormId: 'storm',
  name,
  shape: [[ring]],
  outAt,
  backAt: null,
  version: 0,
});

const square = (west: number, south: number, size: number): LonLat[] => [
  [west, south],
  [west + size, south],
  [west + size, south + size],
  [west, south + size],
  [west, south],
];

/** An L: the upper right quarter of the square from (0, 0) to (2, 2) is missing. */
const L_SHAPE: LonLat[] = [
  [0, 0],
  [2, 0],
  [2, 1],
  [1, 1],
  [1, 2],
  [0, 2],
  [0, 0],
];

describe('areaAt', () => {
  it('finds the area around a point, and none outside all of them', () => {
    const areas = [anArea('a', 1, square(0, 0, 1)), anArea('b', 1, square(2, 0, 1))];
    expect(areaAt([2.5, 0.5], areas)?.name).toBe('b');
    expect(areaAt([1.5, 0.5], areas)).toBeNull();
  });

  it('knows the notch of an outline that bends inwards', () => {
    const areas = [anArea('l', 1, L_SHAPE)];
    expect(areaAt([0.5, 1.5], areas)?.name).toBe('l');
    expect(areaAt([1.5, 0.5], areas)?.name).toBe('l');
    expect(areaAt([1.5, 1.5], areas)).toBeNull();
  });

  it('is not misled by a corner on the height of the point', () => {
    const diamond: LonLat[] = [
      [1, 0],
      [2, 1],
      [1, 2],
      [0, 1],
      [1, 0],
    ];
    const areas = [anArea('d', 1, diamond)];
    expect(areaAt([-1, 1], areas)).toBeNull();
    expect(areaAt([1, 1], areas)?.name).toBe('d');
    expect(areaAt([3, 1], areas)).toBeNull();
  });

  it('takes the area whose power comes back last where areas overlap', () => {
    const back = { ...anArea('back', 50, square(0, 0, 2)), backAt: 300 };
    const later = { ...anArea('later', 100, square(0, 0, 2)), backAt: 400 };
    expect(areaAt([1, 1], [later, back])?.name).toBe('later');
    expect(areaAt([1, 1], [later, anArea('still out', 200, square(0, 0, 2))])?.name).toBe(
      'still out',
    );
  });

  it('takes the earliest loss of power of areas that come back together', () => {
    const areas = [anArea('late', 200, square(0, 0, 2)), anArea('early', 100, square(0, 0, 2))];
    expect(areaAt([1, 1], areas)?.name).toBe('early');
  });
});
