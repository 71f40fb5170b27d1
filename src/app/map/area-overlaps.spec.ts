/** @jest-environment node */
import type { AreaDto } from '@shared/contract/areas';
import { manyAreasWords, overlapsWith } from './area-overlaps';

const square = (west: number, size: number): [number, number][] => [
  [west, 0],
  [west + size, 0],
  [west + size, size],
  [west, size],
  [west, 0],
];
const anArea = (name: string, west: number, backAt: number | null, outAt = 0): AreaDto => ({
  id: name,
  stormId: 'storm',
  name,
  shape: [[square(west, 10)]],
  outAt,
  backAt,
  version: 0,
});
const AREAS = [anArea('Pell', 0, 20), anArea('Heron', 5, null), anArea('Far', 50, 90)];
const words = (at: number): string => `hour ${at}`;

describe('overlapsWith', () => {
  it('names the others that share ground, and who wins where both are', () => {
    const [mine] = AREAS;
    expect(overlapsWith(mine!.shape, mine!, AREAS, 'Pell')).toEqual([
      { area: AREAS[1], wins: true },
    ]);
    expect(overlapsWith(AREAS[1]!.shape, AREAS[1]!, AREAS, 'Heron')).toEqual([
      { area: AREAS[0], wins: false },
    ]);
  });
});

describe('manyAreasWords', () => {
  it('says whose times count and why', () => {
    expect(manyAreasWords([7, 1], 'Heron', AREAS, words)).toBe(
      'Also inside Pell (back hour 20). Heron counts, since it is still out.',
    );
    const later = [anArea('Pell', 0, 20), anArea('Heron', 5, 30)];
    expect(manyAreasWords([7, 1], 'Heron', later, words)).toBe(
      'Also inside Pell (back hour 20). Heron counts, since its power came back last (hour 30).',
    );
  });

  it('does not claim that power came back later when both came back together', () => {
    const together = [anArea('Pell', 0, 20, 2), anArea('Heron', 5, 20, 1)];
    expect(manyAreasWords([7, 1], 'Heron', together, words)).toBe(
      'Also inside Pell (back hour 20). Heron counts, since its power went first.',
    );
  });

  it('has nothing to explain in one area, in none, or outside the one that was chosen', () => {
    expect(manyAreasWords([1, 1], 'Pell', AREAS, words)).toBe('');
    expect(manyAreasWords([99, 1], null, AREAS, words)).toBe('');
  });
});
