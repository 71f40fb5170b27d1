import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { drivePieces, haltsOf } from './route-halts';

const EIGHT = Date.UTC(2026, 8, 3, 8);
const at = (hours: number): number => EIGHT + hours * HOUR_MS;
const lunch = { from: at(3.5), to: at(5), minutes: 30 };
const shift = { startsAt: at(0), endsAt: at(10), breaks: [lunch] };
const stop = (from: number, to: number, change = {}) => ({
  arriveAt: at(from),
  finishAt: at(to),
  driveMinutes: 15,
  isUnderWay: false,
  fetches: false,
  ...change,
});

describe('the halts of a route in force', () => {
  it('puts a break at the first free moment in which it is due', () => {
    // Free at 12:00, on the road again at 12:30.
    const halts = haltsOf([shift], [stop(1, 4), stop(4.75, 5.5)], at(0), 15);
    expect(halts).toEqual([{ kind: 'break', startAt: at(4), finishAt: at(4.5) }]);
  });

  it('draws no break where there is no room for it before the stop, but after it', () => {
    const halts = haltsOf([shift], [stop(1, 4), stop(4.25, 4.75)], at(0), 15);
    expect(halts).toEqual([{ kind: 'break', startAt: at(4.75), finishAt: at(5.25) }]);
  });

  it('lets a break fall away that could only begin after its latest moment', () => {
    expect(haltsOf([shift], [stop(1, 3), stop(3.25, 6)], at(0), 15)).toEqual([]);
    expect(haltsOf([shift], [], at(5.5), 15)).toEqual([]);
  });

  it('puts the store into the drive to the stop that it fetches for', () => {
    const [halt] = haltsOf([{ ...shift, breaks: [] }], [stop(1, 2, { fetches: true })], at(0), 20);
    expect(halt).toEqual({
      kind: 'shop',
      startAt: at(1) - 27.5 * MINUTE_MS,
      finishAt: at(1) - 7.5 * MINUTE_MS,
    });
  });

  it('puts nothing before a visit that is under way', () => {
    const onSite = stop(1, 4, { isUnderWay: true, fetches: true });
    expect(haltsOf([{ ...shift, breaks: [] }], [onSite], at(2), 20)).toEqual([]);
  });
});

describe('the drive to a stop', () => {
  it('is one stretch that ends with the arrival', () => {
    expect(drivePieces(stop(1, 2), [], -Infinity)).toEqual([{ from: at(0.75), to: at(1) }]);
  });

  it('is two around the store, and both together are the drive', () => {
    const shop = { kind: 'shop' as const, startAt: at(0.6), finishAt: at(0.8) };
    const pieces = drivePieces(stop(1, 2), [shop], at(0));
    expect(pieces.map(({ to }) => to)).toEqual([at(0.6), at(1)]);
    const driven = pieces.reduce((sum, { from, to }) => sum + to - from, 0);
    expect(driven).toBe(15 * MINUTE_MS);
  });

  it('does not count the store before the stop before', () => {
    const shop = { kind: 'shop' as const, startAt: at(0.6), finishAt: at(0.8) };
    expect(drivePieces(stop(3, 4), [shop], at(2))).toHaveLength(1);
  });
});
