import { posedCall, POSING, type PosedStake } from '@shared/domain/planner/pose';

const HOUR = 3600;
const LIMIT = 50_000;
const told = { now: 0, medicineWeight: 5, lateDollars: 150 };

const stake = (isMedicine: boolean, moments: PosedStake['moments']): PosedStake => ({
  value: 300,
  isMedicine,
  moments,
});
const atLimit = [{ at: LIMIT, share: 1 }];
const total = (parts: readonly { readonly value: number }[]): number =>
  parts.reduce((sum, { value }) => sum + value, 0);
const deadlinesOf = (one: PosedStake, now = 0) =>
  posedCall({ stakes: [one], window: null }, { ...told, now }).deadlines;

describe('posedCall', () => {
  it.each([false, true])(
    'aims before a limit, and loses none of a value: medicine %s',
    (isMedicine) => {
      const deadlines = deadlinesOf(stake(isMedicine, atLimit));
      expect(total(deadlines)).toBeCloseTo(300, 9);
      expect(deadlines.length).toBeGreaterThan(1);
      // Never that contents keep longer than they do; and as long as something is left, that it is.
      expect(Math.max(...deadlines.map(({ at }) => at))).toBe(LIMIT);
    },
  );

  it('counts a margin that has passed at the next moment: until its limit all can be saved', () => {
    const [only, ...others] = deadlinesOf(stake(true, atLimit), LIMIT - 60);
    expect(only).toEqual({ at: LIMIT, value: 300 });
    expect(others).toEqual([]);
  });

  it('leaves the moments before the limit where they are', () => {
    const moments = [
      { at: LIMIT - 5 * HOUR, share: 0.2 },
      { at: LIMIT, share: 0.8 },
    ];
    expect(deadlinesOf(stake(false, moments))[0]).toEqual({ at: LIMIT - 5 * HOUR, value: 60 });
  });

  it('keeps the window that was promised, and prices its end once more before it', () => {
    const posed = (window: readonly [number, number]) => posedCall({ stakes: [], window }, told);
    expect(posed([0, 7200])).toMatchObject({
      windows: [[0, 7200]],
      deadlines: [{ at: 7200 - POSING.windowMargin, value: 150 }],
    });
    expect(posed([7000, 7200]).deadlines).toEqual([{ at: 7000, value: 150 }]);
  });

  it('weighs waiting by what can still be saved, whether or not a rule says until when', () => {
    const weightOf = (...stakes: PosedStake[]) => posedCall({ stakes, window: null }, told).weight;
    expect([weightOf(), weightOf(stake(false, atLimit)), weightOf(stake(true, []))]).toEqual([
      1, 2, 5,
    ]);
  });
});
