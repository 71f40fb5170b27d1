/** @jest-environment node */
import { HOUR_MS } from '@shared/domain/instant';
import { fromEntry, nextEntry, overlapIn, sameShifts, toEntry, type Shift } from './shift-entry';

const ZONE = 'America/New_York';
const shift = (text: readonly [string, string, string]): Shift => {
  const [date, from, to] = text;
  const read = fromEntry({ date, from, to }, ZONE);
  if (typeof read === 'string') throw new Error(read);
  return read;
};

describe('a shift as it is written', () => {
  it('is in the region’s time', () => {
    // 07:00 in New York in October is 11:00 UTC.
    expect(shift(['2026-10-03', '07:00', '15:30'])).toEqual({
      startsAt: Date.UTC(2026, 9, 3, 11),
      endsAt: Date.UTC(2026, 9, 3, 19, 30),
    });
  });

  it('goes on into the next day when it ends before it begins, also across a month', () => {
    const night = shift(['2026-10-31', '22:00', '06:00']);
    // The clocks go back at 02:00 on November 1: nine hours by the sun, eight on the wall.
    expect((night.endsAt - night.startsAt) / HOUR_MS).toBe(9);
    expect(toEntry(night, ZONE)).toEqual({ date: '2026-10-31', from: '22:00', to: '06:00' });
  });

  it.each([
    [{ date: '', from: '07:00', to: '15:00' }, 'Which day?'],
    [{ date: '2026-10-03', from: '', to: '15:00' }, 'From when until when?'],
    [{ date: '2026-10-03', from: '07:00', to: '06:00' }, 'A shift of more than 18 hours'],
  ])('says what is wrong with %j', (entry, words) => {
    expect(fromEntry(entry, ZONE)).toContain(words);
  });

  it('is followed by the same hours on the next day', () => {
    const next = (date: string) => nextEntry([{ date, from: '07:00', to: '15:30' }], 0, ZONE).date;
    expect(next('2026-10-31')).toBe('2026-11-01');
    expect(next('2026-12-31')).toBe('2027-01-01');
    expect(nextEntry([], Date.UTC(2026, 9, 3, 2), ZONE).date).toBe('2026-10-02');
  });
});

describe('a break of a shift', () => {
  const night = { date: '2026-10-03', from: '22:00', to: '06:00' };
  const pause = { from: '01:00', to: '03:00', minutes: '30' };

  it('lies on the next day when its times come before the shift begins, and reads back', () => {
    const read = fromEntry({ ...night, breaks: [pause] }, ZONE);
    expect(read).toMatchObject({
      // 01:00 in New York in October is 05:00 UTC.
      breaks: [{ from: Date.UTC(2026, 9, 4, 5), to: Date.UTC(2026, 9, 4, 7), minutes: 30 }],
    });
    expect(toEntry(read as Shift, ZONE).breaks).toEqual([pause]);
  });

  it.each([
    [{ ...pause, from: '' }, 'between which times'],
    [{ ...pause, minutes: '4' }, '5 to 180 minutes'],
    [{ ...pause, to: '05:45' }, 'does not lie within its shift'],
    [{ ...pause, from: '03:00', to: '01:00' }, 'at the latest before'],
  ])('says what is wrong with %j', (entry, words) => {
    expect(fromEntry({ ...night, breaks: [entry] }, ZONE)).toContain(words);
  });

  it('makes two shifts with the same hours differ', () => {
    const one = { startsAt: 60_000, endsAt: 9_000_000 };
    const broken = { ...one, breaks: [{ from: 600_000, to: 1_200_000, minutes: 10 }] };
    expect(sameShifts([one], [broken])).toBe(false);
    expect(sameShifts([broken], [{ ...broken }])).toBe(true);
  });
});

describe('overlapIn', () => {
  it('finds two shifts that share time, and lets them touch', () => {
    const [early, late, long] = [
      shift(['2026-10-03', '07:00', '12:00']),
      shift(['2026-10-03', '12:00', '18:00']),
      shift(['2026-10-03', '11:00', '13:00']),
    ];
    expect(overlapIn([late, early])).toBeNull();
    expect(overlapIn([late, long])).toEqual([long, late]);
  });
});

describe('sameShifts', () => {
  it('minds neither order nor seconds', () => {
    const one = { startsAt: 60_000, endsAt: 120_000 };
    const two = { startsAt: 180_000, endsAt: 240_000 };
    expect(sameShifts([one, two], [two, { ...one, startsAt: 61_000 }])).toBe(true);
    expect(sameShifts([one], [one, two])).toBe(false);
  });
});
