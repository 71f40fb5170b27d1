import type { DrainDto } from '@shared/contract/office';
import { HOUR_MS } from '@shared/domain/instant';
import { forecastOf, totalsOf } from './drain-curves';
import { backlogWords, forecastWords } from './drain-words';
import { aDrain, AT } from './drain-fixture';
import { spread } from './end-labels';
import { sortedShares } from './share-table';
import { timeTicks } from './time-ticks';

const forecast = (
  emptyAt: number | null,
  arrivalsPerHour: number,
  settledPerHour: number,
): DrainDto['forecast'] => ({ emptyAt, arrivalsPerHour, settledPerHour, assumption: 'If so' });

describe('forecastOf', () => {
  it('draws from what is open now to nothing at the empty time', () => {
    const drain = aDrain({ open: 12, forecast: forecast(AT + 4 * HOUR_MS, 2, 5) });
    expect(forecastOf(drain)).toEqual({
      kind: 'empties',
      line: [
        { x: AT, y: 12 },
        { x: AT + 4 * HOUR_MS, y: 0 },
      ],
      isCut: false,
    });
  });

  it('cuts a far empty time off where the picture ends, on the same line', () => {
    // 6 h of 24 h: three quarters of 12 are left.
    const drain = aDrain({ open: 12, forecast: forecast(AT + 24 * HOUR_MS, 2, 2.5) });
    expect(forecastOf(drain)).toEqual({
      kind: 'empties',
      line: [
        { x: AT, y: 12 },
        { x: AT + 6 * HOUR_MS, y: 9 },
      ],
      isCut: true,
    });
  });

  it('shows a backlog that grows as growing', () => {
    // 10 - 4 an hour for 3 hours on top of 12.
    const drain = aDrain({ open: 12, forecast: forecast(null, 10, 4) });
    expect(forecastOf(drain)).toMatchObject({
      kind: 'grows',
      line: [
        { x: AT, y: 12 },
        { x: AT + 3 * HOUR_MS, y: 30 },
      ],
    });
  });

  it('draws nothing when nothing is open, or nothing moves', () => {
    expect(forecastOf(aDrain({ open: 0, forecast: forecast(AT, 0, 4) })).kind).toBe('is-empty');
    expect(forecastOf(aDrain({ open: 3, forecast: forecast(null, 0, 0) }))).toMatchObject({
      kind: 'stands',
      line: [],
    });
  });
});

describe('the words of the forecast', () => {
  const clock = () => 'Thu 06:15';
  it('tell when, how long until then, or why not', () => {
    const words = (drain: DrainDto) => forecastWords(drain, clock);
    expect(words(aDrain({ open: 12, forecast: forecast(AT + 4.5 * HOUR_MS, 2, 5) }))).toBe(
      'Empty Thu 06:15, in 4 h 30.',
    );
    expect(words(aDrain({ open: 12, forecast: forecast(null, 10.25, 4) }))).toBe(
      'Not empty at this rate: it grows by 6.3 an hour.',
    );
    expect(words(aDrain({ open: 0, forecast: forecast(AT, 0, 4) }))).toBe('Nothing is open.');
  });

  it('are part of what the picture tells, unless the storm is closed', () => {
    const drain = aDrain({ open: 12, forecast: forecast(AT + HOUR_MS, 2, 5) });
    expect(backlogWords(drain, clock, false)).toContain('12 are open. Empty Thu 06:15');
    expect(backlogWords(drain, clock, true)).not.toContain('Empty');
  });
});

describe('timeTicks', () => {
  it('stand on round hours of the region, with the day at midnight', () => {
    const from = Date.UTC(2026, 8, 3, 1, 40); // 21:40 in New York the day before
    const ticks = timeTicks(from, from + 8 * HOUR_MS, 'America/New_York', 5);
    expect(ticks.map(({ label }) => label)).toEqual(['22:00', 'Thu 00:00', '02:00', '04:00']);
  });

  it('are never more than asked for', () => {
    for (const hours of [1, 5, 13, 40, 200]) {
      const ticks = timeTicks(AT, AT + hours * HOUR_MS, 'America/New_York', 6);
      expect(ticks.length).toBeLessThanOrEqual(7);
    }
  });
});

describe('spread', () => {
  it('moves labels apart that would cover each other, and keeps them inside', () => {
    const ys = (...at: number[]) =>
      spread(
        at.map((y) => ({ x: 0, y })),
        0,
        100,
      ).map(({ y }) => y);
    expect(ys(50, 52)).toEqual([50, 67]);
    const low = ys(99, 99, 99);
    expect(low.at(-1)).toBeLessThanOrEqual(92);
    for (const [i, y] of low.entries()) if (i > 0) expect(y - (low[i - 1] ?? 0)).toBe(17);
  });
});

describe('sortedShares', () => {
  it('sorts by any figure either way, with nobody last', () => {
    const base = { ...totalsOf(aDrain({ open: 0 })), name: '' };
    const rows = [
      { ...base, id: null, name: 'Nobody', open: 9 },
      { ...base, id: 'a', name: 'Ada', open: 1 },
      { ...base, id: 'b', name: 'Bo', open: 5 },
    ];
    const names = (active: string, direction: 'asc' | 'desc') =>
      sortedShares(rows, { active, direction }).map(({ name }) => name);
    expect(names('open', 'desc')).toEqual(['Bo', 'Ada', 'Nobody']);
    expect(names('open', 'asc')).toEqual(['Ada', 'Bo', 'Nobody']);
    expect(names('name', 'desc')).toEqual(['Bo', 'Ada', 'Nobody']);
  });
});
