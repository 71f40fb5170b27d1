/** @jest-environment node */
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { ago, clockTime, dayTime, duration, inHours, money, moneyExact, startOfDay } from './zone';

const NEW_YORK = 'America/New_York';
const HALIFAX = 'America/Halifax';

describe('clockTime and dayTime', () => {
  it('say the time of the region, by a clock of 24 hours', () => {
    const at = Date.UTC(2026, 8, 3, 4, 5);
    expect(clockTime(at, NEW_YORK)).toBe('00:05');
    expect(dayTime(at, NEW_YORK)).toBe('Thu 00:05');
    expect(dayTime(at, HALIFAX)).toBe('Thu 01:05');
  });
});

describe('duration', () => {
  it.each([
    [59_999, '0 min'],
    [45 * MINUTE_MS, '45 min'],
    [HOUR_MS, '1 h 00'],
    [3 * HOUR_MS + 10 * MINUTE_MS, '3 h 10'],
    [50 * HOUR_MS, '50 h'],
    [658 * HOUR_MS, '27 days'],
    [-5, '0 min'],
  ])('says %d ms as %s', (ms, words) => {
    expect(duration(ms)).toBe(words);
  });
});

describe('inHours and ago', () => {
  it('say which side of now a moment lies on', () => {
    expect(inHours(20 * MINUTE_MS, 0)).toBe('20 min');
    expect(inHours(0, 20 * MINUTE_MS)).toBe('20 min ago');
    expect(ago(0, 30_000)).toBe('just now');
  });
});

describe('startOfDay', () => {
  // Clocks in New York went back on 2026-11-01 and forward on 2026-03-08, both at 02:00.
  it.each([
    ['an ordinary day', '2026-09-03T18:00:00Z', '2026-09-03T04:00:00Z'],
    ['the day of 25 hours', '2026-11-02T03:30:00Z', '2026-11-01T04:00:00Z'],
    ['the day of 23 hours', '2026-03-09T03:30:00Z', '2026-03-08T05:00:00Z'],
    ['its own start', '2026-09-03T04:00:00Z', '2026-09-03T04:00:00Z'],
  ])('finds the start of %s', (_, at, start) => {
    expect(new Date(startOfDay(Date.parse(at), NEW_YORK)).toISOString()).toBe(
      start.replace('Z', '.000Z'),
    );
  });
});

describe('money', () => {
  it('rounds estimates and keeps the cents of prices', () => {
    expect(money(123_956)).toBe('$1,240');
    expect(moneyExact(1_240)).toBe('$12.40');
  });
});
