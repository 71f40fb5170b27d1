/** @jest-environment node */
import { HOUR_MS } from '@shared/domain/instant';
import { aheadWords, differenceWords, emptyWords } from './ahead/outlook-words';
import { changeWords, FIELDS, NOTHING_CHANGED, readField } from './ahead/what-if-fields';
import { aheadLines, totalsOf } from './drain-curves';
import { aDrain, anOutlook, AT } from './drain-fixture';
import { backlogWords } from './drain-words';
import { spread, stacked } from './end-labels';
import { sortedShares } from './share-table';
import { timeTicks } from './time-ticks';

describe('aheadLines', () => {
  const same = (value: number) => ({ low: value, middle: value, high: value });

  it('are the outlook’s curve and its edges', () => {
    const lines = aheadLines(anOutlook(), aDrain({ open: 25 }));
    expect(lines.middle.map(({ y }) => y)).toEqual([25, 12, 0]);
    expect(lines.low[1]).toEqual({ x: AT + 2 * HOUR_MS, y: 8 });
    expect(lines.high.at(-1)).toEqual({ x: AT + 5 * HOUR_MS, y: 1 });
    expect(lines.isCut).toBe(false);
  });

  it('end where the picture ends, so that the past keeps its part', () => {
    const curve = Array.from({ length: 60 }, (_, i) => ({ at: AT + i * HOUR_MS, open: same(9) }));
    const lines = aheadLines(anOutlook({ curve }), aDrain({ open: 9 }));
    // The drain looks two hours back; twelve ahead are the least.
    expect(lines.middle.at(-1)?.x).toBe(AT + 12 * HOUR_MS);
    expect(lines.isCut).toBe(true);
  });
});

describe('the words of the forecast', () => {
  const clock = (at: number) => `+${(at - AT) / HOUR_MS} h`;
  const words = (told: Parameters<typeof anOutlook>[0], open = 12) =>
    emptyWords(anOutlook(told), aDrain({ open }), clock);

  it('tell when, how long until then, and how sure that is', () => {
    expect(words({})).toBe('Empty +4 h, in 4 h 00; four times of five between +3 h and +5 h.');
    expect(words({}, 0)).toBe('Nothing is open.');
  });

  it('say until when one sees when it may not be empty by then', () => {
    const emptyAt = { low: AT + HOUR_MS, middle: AT + 4 * HOUR_MS, high: null };
    expect(words({ emptyAt })).toContain('one time in ten before +1 h, one in ten not by +36 h');
    expect(words({ emptyAt: { low: null, middle: null, high: null }, emptyShare: 0.04 })).toContain(
      'not empty by +36 h, as far as shifts are entered: it is in 4 of 100 futures',
    );
  });

  it('tell what is lost and what comes, each with its band', () => {
    expect(aheadWords(anOutlook())).toBe(
      'Until then 9 more calls (4 to 15) and $200 lost ($100 to $400); ' +
        'medicine is lost in 1 household (0 to 2).',
    );
  });

  it('tell what a change does, and its band', () => {
    const outlook = anOutlook();
    const difference = {
      emptyHours: { low: -6, middle: -4.5, high: 0 },
      lostCents: { low: -90_00, middle: -40_00, high: 10_00 },
      medicineLost: { low: -1, middle: 0, high: 0 },
      openAtEnd: { low: -20, middle: -12, high: -3 },
      soonerShare: 0.875,
    };
    const change = { ...NOTHING_CHANGED, technicians: 2 };
    const told = { at: AT, change, asItIs: outlook, difference, elapsedMs: 1 };
    expect(differenceWords({ ...told, changed: outlook }, clock)).toBe(
      'Empty 4 h 30 sooner (−6 h 00 to 0 min); sooner in 88 of 100 futures. ' +
        'Lost: $40 less (−$90 to +$10). Households whose medicine is lost: no fewer (−1 to 0).',
    );
    const never = anOutlook({ emptyAt: { low: null, middle: null, high: null } });
    expect(differenceWords({ ...told, changed: never }, clock)).toContain(
      'Open +36 h: 12 fewer (−20 to −3).',
    );
  });

  it('are part of what the picture tells, unless there is no forecast', () => {
    const drain = aDrain({ open: 12 });
    expect(backlogWords(drain, clock, anOutlook())).toContain('12 are open. Empty +4 h');
    expect(backlogWords(drain, clock, null)).not.toContain('Empty');
  });
});

describe('the fields of a change', () => {
  const [technicians, overtime] = FIELDS;
  it('read what people type, and say what is wrong with it', () => {
    expect(readField(technicians!, ' −3 ')).toBe(-3);
    expect(readField(technicians!, '')).toBe(0);
    expect(readField(overtime!, '1,5')).toBe(1.5);
    expect(readField(overtime!, '9')).toBe('Hours of overtime: a number from 0 to 8.');
    expect(readField(technicians!, '1.5')).toBe('Technicians, + or −: in steps of 1, such as 2.');
    expect(readField(technicians!, 'two')).toContain('a number from −30'.replace('−', '-'));
  });

  it('are told in words', () => {
    expect(
      changeWords({
        technicians: -1,
        overtimeHours: 1,
        secondShift: 2,
        phoneStaff: 3,
        partsOnEachVan: 4,
      }),
    ).toBe(
      '1 technician fewer, 1 hour of overtime, 2 technicians in a second shift, ' +
        '3 people more on the phones, 4 more of each part on each van',
    );
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

describe('stacked', () => {
  it('puts the labels above the topmost end, in the order of the lines', () => {
    const ends = [60, 80, 140].map((y, n) => ({ x: 10, y, n })).reverse();
    const placed = stacked(ends, 0);
    expect(placed.map(({ n }) => n)).toEqual([0, 1, 2]);
    expect(placed.every(({ y }) => y < 60)).toBe(true);
    expect(placed[1]!.y - placed[0]!.y).toBeGreaterThanOrEqual(17);
  });

  it('stays within the picture', () => {
    expect(stacked([{ x: 10, y: 12 }], 10)[0]!.y).toBeGreaterThan(10);
    expect(stacked([], 10)).toEqual([]);
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
