/** @jest-environment node */
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { readTimeEntry } from './time-entry';
import { instantOnWall, wallAt } from './wall-clock';

const ZONE = 'America/New_York';
/** Thursday 3 September 2026, 02:30 in New York, which is UTC-4 in summer. */
const NOW = Date.UTC(2026, 8, 3, 6, 30);
const read = (text: string) => readTimeEntry(text, NOW, ZONE);
const moment = (at: number) => ({ kind: 'moment', at });

describe('readTimeEntry', () => {
  it.each([
    ['4 h ago', 4 * HOUR_MS],
    ['4h', 4 * HOUR_MS],
    ['4', 4 * HOUR_MS],
    ['12', 12 * HOUR_MS],
    ['1.5 h', 1.5 * HOUR_MS],
    ['1 h 20 min ago', 80 * MINUTE_MS],
    ['90 min', 90 * MINUTE_MS],
    ['2 days ago', 48 * HOUR_MS],
    ['now', 0],
  ])('counts "%s" back from now', (text, back) => {
    expect(read(text)).toEqual(moment(NOW - back));
  });

  it.each([
    ['22:30', Date.UTC(2026, 8, 3, 2, 30)],
    ['10:30p', Date.UTC(2026, 8, 3, 2, 30)],
    ['2230', Date.UTC(2026, 8, 3, 2, 30)],
    ['2:15a', Date.UTC(2026, 8, 3, 6, 15)],
    ['2:15', Date.UTC(2026, 8, 3, 6, 15)],
    ['yesterday 22:30', Date.UTC(2026, 8, 3, 2, 30)],
    ['Tue 6 am', Date.UTC(2026, 8, 1, 10, 0)],
  ])('takes "%s" as the last such time that has been', (text, at) => {
    expect(read(text)).toEqual(moment(at));
  });

  it('refuses what is still to come, in words', () => {
    expect(read('today 5:00 pm')).toEqual({ kind: 'unreadable', why: 'That is still to come.' });
  });

  it('refuses what it cannot read and shows how to write it', () => {
    expect(read('when the tree fell')).toEqual({
      kind: 'unreadable',
      why: 'Write it as 4 h ago, 22:30 or yesterday 22:30.',
    });
  });

  it('leaves an empty field empty', () => {
    expect(read('  ')).toEqual({ kind: 'blank' });
  });
});

describe('instantOnWall', () => {
  const wall = (month: number, day: number, hour: number, minute = 0) =>
    instantOnWall({ year: 2026, month, day, hour, minute }, ZONE);

  it('knows summer and winter time', () => {
    expect(wall(7, 1, 12)).toBe(Date.UTC(2026, 6, 1, 16));
    expect(wall(12, 1, 12)).toBe(Date.UTC(2026, 11, 1, 17));
  });

  // In 2026 the United States change their clocks on 8 March and 1 November at 02:00.
  it('takes the earlier of two when the clocks go back', () => {
    expect(wall(11, 1, 1, 30)).toBe(Date.UTC(2026, 10, 1, 5, 30));
  });

  it('reads a time that was skipped in spring as the moment after the change', () => {
    expect(wall(3, 8, 2, 30)).toBe(Date.UTC(2026, 2, 8, 7, 30));
  });

  it('is the inverse of the wall for every hour of a year', () => {
    for (let at = Date.UTC(2026, 0, 1); at < Date.UTC(2027, 0, 1); at += 7 * HOUR_MS) {
      const back = instantOnWall(wallAt(at, ZONE), ZONE);
      // The hour that comes twice is the only one that may come back an hour early.
      const isTwice = at >= Date.UTC(2026, 10, 1, 6) && at < Date.UTC(2026, 10, 1, 7);
      expect(at - back).toBe(isTwice ? HOUR_MS : 0);
    }
  });
});
