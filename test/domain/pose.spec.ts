import {
  isWorthChanging,
  POSING,
  posedDeadlines,
  posedPromise,
  posedWindow,
} from '@shared/domain/planner/pose';

const total = (parts: readonly { readonly value: number }[]): number =>
  parts.reduce((sum, { value }) => sum + value, 0);

describe('posing', () => {
  it.each([
    { isMedicine: false, factor: 1 },
    { isMedicine: true, factor: POSING.medicineFactor },
  ])('spreads a value over moments and loses none of it: $isMedicine', ({ isMedicine, factor }) => {
    const parts = posedDeadlines({ at: 50_000, value: 300, isMedicine });
    expect(total(parts)).toBeCloseTo(300 * factor, 9);
    // Up to four deadlines a job: a compartment alone never asks for more.
    expect(parts.length).toBeLessThanOrEqual(4);
  });

  it('never says that contents keep longer than they do', () => {
    for (const isMedicine of [false, true])
      for (const { at } of posedDeadlines({ at: 50_000, value: 1, isMedicine }))
        expect(at).toBeLessThanOrEqual(50_000);
  });

  it('aims at a promised window with a margin, and never past its begin', () => {
    expect(posedWindow([0, 7200])).toEqual([0, 7200 - POSING.windowMargin]);
    expect(posedWindow([7000, 7200])).toEqual([7000, 7000]);
    expect(total(posedPromise([0, 7200]))).toBe(POSING.promiseValue);
  });

  it('changes a plan for a gain that is worth it only', () => {
    expect(isWorthChanging(1000, 1000 - POSING.leastGain)).toBe(false);
    expect(isWorthChanging(1000, 990)).toBe(true);
    expect(isWorthChanging(100_000, 99_990)).toBe(false);
  });
});
