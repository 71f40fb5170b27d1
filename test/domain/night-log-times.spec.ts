import { isWholeWhen, readWhen } from '@shared/domain/night-log/local-time';

const clock = (raw: string): string | null => {
  const said = readWhen(raw).clock;
  return (
    said &&
    `${said.hour}:${String(said.minute).padStart(2, '0')}${said.style === 'bare' ? '?' : ''}`
  );
};

describe('readWhen', () => {
  it.each([
    ['2:15a', '2:15'],
    ['2:15 AM', '2:15'],
    ['2:15 a.m.', '2:15'],
    ['2:15:09 AM', '2:15'],
    ['02:15', '2:15'],
    ['02:15:33', '2:15'],
    ['0215', '2:15'],
    ['0215 hrs', '2:15'],
    ['0215h', '2:15'],
    ['215a', '2:15'],
    ['2.15a', '2:15'],
    ['2.15', '2:15?'],
    ['2:15', '2:15?'],
    ['215', '2:15?'],
    ['2h15', '2:15?'],
    ['12:05a', '0:05'],
    ['1205 AM', '0:05'],
    ['12:05p', '12:05'],
    ['12:05', '12:05?'],
    ['00:05', '0:05'],
    ['24:00', '0:00'],
    ['11:50P', '23:50'],
    ['11:50 pm', '23:50'],
    ['2350', '23:50'],
    ['23.50', '23:50'],
    ['2am', '2:00'],
    ['2 a', '2:00'],
    ['9p', '21:00'],
    ['midnight', '0:00'],
    ['12 noon', '12:00'],
    ['~2:15a', '2:15'],
    ['abt 2:15 am', '2:15'],
    ['2;15a', '2:15'],
    ['2 15 am', '2:15'],
    ['0.09375', '2:15'],
    ['2:15a-2:20a', '2:15'],
    ['@ 2:15 AM', '2:15'],
  ])('takes %p for %s', (raw, expected) => {
    expect(clock(raw)).toBe(expected);
  });

  it.each([
    ['12/1 2:15a', 'either 12 1 -', '2:15'],
    ['12/01/2026 02:15', 'either 12 1 2026', '2:15'],
    ['12/01/26, 2:15 AM', 'either 12 1 2026', '2:15'],
    ['12-1-26 215a', 'either 12 1 2026', '2:15'],
    ['13/12/2026 02:15', 'full 2026 12 13', '2:15'],
    ['12/13 2:15a', 'full - 12 13', '2:15'],
    ['2026-12-01T02:15', 'full 2026 12 1', '2:15'],
    ['2026-12-01 02:15:00', 'full 2026 12 1', '2:15'],
    ['01-Dec-26 02:15', 'full 2026 12 1', '2:15'],
    ['01DEC26 0215', 'full 2026 12 1', '2:15'],
    ['1 December 2026, 2.15 am', 'full 2026 12 1', '2:15'],
    ['Dec 1 2:15a', 'full - 12 1', '2:15'],
    ['Dec. 1st, 2026 at 2:15 AM', 'full 2026 12 1', '2:15'],
    ['Tue Dec 1 02:15', 'full - 12 1', '2:15'],
    ['Tuesday, December 1, 2026', 'full 2026 12 1', null],
    ['2:15a 12/1', 'either 12 1 -', '2:15'],
    ['12/1@2:15a', 'either 12 1 -', '2:15'],
    ['20261201 0215', 'full 2026 12 1', '2:15'],
    ['20261201', 'full 2026 12 1', null],
    ['12012026', 'either 12 1 2026', null],
    ['11302026', 'full 2026 11 30', null],
    ['202612010215', 'full 2026 12 1', '2:15'],
    ['46357.09375', 'full 2026 12 1', '2:15'],
    ['46357', 'full 2026 12 1', null],
    ['01.12.2026 02:15', 'either 1 12 2026', '2:15'],
    ['Tue 2:15a', 'weekday 2', '2:15'],
    ['last night 10p', 'relative -1', '22:00'],
    ['yesterday 9:30pm', 'relative -1', '21:30'],
    ['1 dic 2026 2:15 am', 'full 2026 12 1', '2:15'],
  ])('takes %p for the day %s and the time %s', (raw, day, time) => {
    const { date } = readWhen(raw);
    const shown = !date
      ? null
      : date.kind === 'full'
        ? `full ${date.year ?? '-'} ${date.month} ${date.day}`
        : date.kind === 'either'
          ? `either ${date.first} ${date.second} ${date.year ?? '-'}`
          : date.kind === 'weekday'
            ? `weekday ${date.weekday}`
            : `relative ${date.days}`;
    expect([shown, clock(raw)]).toEqual([day, time]);
    expect(isWholeWhen(raw)).toBe(true);
  });

  it.each([
    ['2026-12-01T07:15:00Z', '2026-12-01T07:15:00.000Z'],
    ['2026-12-01T02:15:00-05:00', '2026-12-01T07:15:00.000Z'],
    ['2026-12-01 02:15:00-0500', '2026-12-01T07:15:00.000Z'],
    ['1796109300', '2026-12-01T07:15:00.000Z'],
    ['1796109300000', '2026-12-01T07:15:00.000Z'],
  ])('takes %p for a moment that needs no time zone', (raw, iso) => {
    const { instant } = readWhen(raw);
    expect(instant === null ? null : new Date(instant).toISOString()).toBe(iso);
  });

  it.each([
    'fridge',
    '',
    '12 Cape Loop Rd',
    '25:99',
    'call after 6: 252-555-0142',
    'Apt 4',
    'still out',
  ])('does not call %p a time', (raw) => {
    expect(isWholeWhen(raw)).toBe(false);
  });
});
