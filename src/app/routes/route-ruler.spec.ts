/** @jest-environment node */
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { blockOf, placeAt, spanOf, ticksOf, timeAt, widthOf, xOf } from './route-ruler';

const NOON = Date.UTC(2026, 8, 3, 12);
const at = (hours: number): number => NOON + hours * HOUR_MS;
const SPAN = { from: at(-1), to: at(9) };
const stop = (from: number, to: number, driveMinutes = 15) => ({
  arriveAt: at(from),
  finishAt: at(to),
  driveMinutes,
});

describe('the ruler of the routes', () => {
  it('reaches in whole hours from before now to the end of the last shift that counts', () => {
    const shifts = [
      { startsAt: at(-3), endsAt: at(6.5) },
      // Tomorrow's shift has no stop yet: the night is not drawn.
      { startsAt: at(20), endsAt: at(30) },
    ];
    expect(spanOf(NOON, shifts, [])).toEqual({ from: at(-1), to: at(7) });
  });

  it('reaches to tomorrow when a stop lies there', () => {
    const span = spanOf(NOON, [], [stop(20, 20.75)]);
    expect(span.to).toBe(at(21));
  });

  it('shows a stop that was reached hours ago, and no more than six of them', () => {
    expect(spanOf(NOON, [], [stop(-2.5, 0.5)]).from).toBe(at(-3));
    expect(spanOf(NOON, [], [stop(-30, 0.5)]).from).toBe(at(-6));
  });

  it('never is longer than four days, whatever a stop says', () => {
    const span = spanOf(NOON, [], [stop(400, 401)]);
    expect(span.to - span.from).toBe(96 * HOUR_MS);
  });

  it('places a moment in proportion, and keeps what lies outside at its ends', () => {
    expect(widthOf(SPAN, 90)).toBe(900);
    expect(xOf(NOON, SPAN, 90)).toBe(90);
    expect(xOf(at(-5), SPAN, 90)).toBe(0);
    expect(xOf(at(50), SPAN, 90)).toBe(900);
    expect(timeAt(xOf(at(3.25), SPAN, 90), SPAN, 90)).toBe(at(3.25));
  });

  it('draws the drive up to the block and the block as long as the visit', () => {
    // 90 px to the hour: a drive of 20 min is 30 px, a visit of 45 min 67.5 px.
    const block = blockOf(stop(1, 1.75, 20), SPAN, 90);
    expect(block).toEqual({ x: 180, width: 67.5, driveX: 150 });
  });

  it('keeps every block large enough to be hit', () => {
    expect(blockOf(stop(1, 1 + 5 / 60), SPAN, 36).width).toBe(24);
  });

  it('labels every hour where there is room, else every second or third of the day', () => {
    const labelled = (px: number) =>
      ticksOf(SPAN, px, 'America/New_York')
        .filter((tick) => tick.isLabelled)
        .map((tick) => new Date(tick.at).getUTCHours() - 4);
    // New York is four hours behind in September.
    expect(labelled(90)).toEqual([7, 8, 9, 10, 11, 12, 13, 14, 15, 16, 17]);
    expect(labelled(36)).toEqual([8, 10, 12, 14, 16]);
  });
});

describe('placeAt', () => {
  const route = [stop(1, 2), stop(3, 4)];

  it.each([
    { hours: 0, place: 0 },
    { hours: 1.4, place: 0 },
    { hours: 1.6, place: 1 },
    { hours: 2.5, place: 1 },
    { hours: 3.6, place: 2 },
    { hours: 9, place: 2 },
  ])('puts what is dropped at $hours h in place $place', ({ hours, place }) => {
    expect(placeAt(at(hours), route)).toBe(place);
  });

  it('puts it first on an empty route', () => {
    expect(placeAt(NOON + MINUTE_MS, [])).toBe(0);
  });
});
