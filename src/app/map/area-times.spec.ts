/** @jest-environment node */
import type { AreaDto } from '@shared/contract/areas';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { NOW, STORM_ID } from '../core/testing';
import {
  areaChanges,
  BLANK_TIMES,
  problemIn,
  setStillOut,
  timesOf,
  typeBack,
  typeOut,
} from './area-times';

const ZONE = 'America/New_York';
const words = (at: number): string => new Date(at).toISOString();

const anArea = (change: Partial<AreaDto> = {}): AreaDto => ({
  id: '00000000-0000-4000-8000-000000000001',
  stormId: STORM_ID,
  name: 'Heron 1',
  shape: [
    [
      [
        [-40, 34],
        [-39.9, 34],
        [-39.9, 34.1],
        [-40, 34],
      ],
    ],
  ],
  outAt: NOW - 5 * HOUR_MS,
  backAt: NOW - HOUR_MS,
  version: 3,
  ...change,
});

describe('the times of an area', () => {
  it('read what a dispatcher types while listening', () => {
    const times = typeOut(BLANK_TIMES, '4 h ago', NOW, ZONE);
    expect(times.outAt).toBe(NOW - 4 * HOUR_MS);
    expect(typeBack(times, '20 min ago', NOW, ZONE)).toMatchObject({
      backAt: NOW - 20 * MINUTE_MS,
      isStillOut: false,
    });
  });

  it('keep a time that cannot be read apart from one that is missing', () => {
    const unreadable = typeOut({ ...BLANK_TIMES, name: 'A' }, 'after supper', NOW, ZONE);
    expect(unreadable.outAt).toBeNull();
    expect(problemIn(unreadable)).toMatch(/^Power went: /);
    expect(problemIn({ ...BLANK_TIMES, name: 'A' })).toBe('When did the power go?');
  });

  it('forget when the power came back as soon as it is still out', () => {
    const back = typeBack({ ...BLANK_TIMES, outAt: NOW }, '5 min ago', NOW, ZONE);
    expect(setStillOut(back, true)).toMatchObject({ backAt: null, backText: '', isStillOut: true });
  });

  it('ask for a name, and for a return after the loss', () => {
    expect(problemIn(timesOf(anArea({ name: ' ' }), words))).toBe('The area needs a name.');
    const turned = anArea({ outAt: NOW - HOUR_MS, backAt: NOW - 2 * HOUR_MS });
    expect(problemIn(timesOf(turned, words))).toBe('It came back before it went.');
    const open = { ...timesOf(anArea({ backAt: null }), words), isStillOut: false };
    expect(problemIn(open)).toMatch(/still out/);
    expect(problemIn(timesOf(anArea(), words))).toBe('');
    expect(problemIn(timesOf(anArea({ backAt: null }), words))).toBe('');
  });
});

describe('areaChanges', () => {
  it('says nothing of what is the same', () => {
    expect(areaChanges(anArea(), anArea({ version: 4 }), words)).toEqual([]);
  });

  it('names each difference', () => {
    const after = anArea({
      name: 'Heron',
      backAt: null,
      shape: [...anArea().shape, ...anArea().shape],
    });
    expect(areaChanges(anArea(), after, words)).toEqual([
      'Name: Heron 1, now Heron',
      `Came back: ${words(NOW - HOUR_MS)}, now still out`,
      'The outline was changed',
    ]);
  });
});
