import { DateTime } from 'luxon';
import { zoneClock } from '../../server/night-log/zone-clock';

const at = (iso: string): number => Date.parse(iso);

describe('zoneClock', () => {
  const eastern = zoneClock('America/New_York');

  it.each([
    ['2026-12-01T07:15:00Z', { year: 2026, month: 12, day: 1, hour: 2, minute: 15 }],
    ['2026-07-01T06:15:00Z', { year: 2026, month: 7, day: 1, hour: 2, minute: 15 }],
  ])('turns %s into the wall clock and back', (iso, local) => {
    expect(eastern.toLocal(at(iso))).toEqual(local);
    expect(eastern.toInstant(local)).toBe(at(iso));
  });

  // The clocks of this zone go back on 1 November 2026 at 2:00 and forward on 8 March 2026 at 2:00.
  it('takes the earlier of two moments when an hour comes twice or is skipped', () => {
    expect(eastern.toInstant({ year: 2026, month: 11, day: 1, hour: 1, minute: 30 })).toBe(
      at('2026-11-01T05:30:00Z'),
    );
    expect(eastern.toInstant({ year: 2026, month: 3, day: 8, hour: 2, minute: 30 })).toBe(
      at('2026-03-08T06:30:00Z'),
    );
  });

  it.each([
    'America/New_York',
    'America/St_Johns',
    'Pacific/Chatham',
    'America/Phoenix',
    'Europe/Lisbon',
  ])('agrees with luxon in %s at every third hour of a year', (zone) => {
    const clock = zoneClock(zone);
    for (let t = at('2026-01-01T00:07:00Z'); t < at('2027-01-01T00:00:00Z'); t += 3 * 3_600_000) {
      const { year, month, day, hour, minute } = DateTime.fromMillis(t, { zone });
      expect(clock.toLocal(t)).toEqual({ year, month, day, hour, minute });
    }
  });
});
