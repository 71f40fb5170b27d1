/** @jest-environment node */
import type { CallRow } from '@shared/contract/calls';
import { DEFAULT_WEIGHING, Ranking } from './ranking';
import { aCallRow, NOW } from './testing';

describe('Ranking', () => {
  it('puts what is lost soonest first and keeps the order of arrival between equals', () => {
    const twin = aCallRow(9, { units: aCallRow(3).units });
    const ranked = new Ranking().rank([aCallRow(30), twin, aCallRow(3)], NOW, DEFAULT_WEIGHING);
    expect(ranked.map(({ call }) => call.number)).toEqual([3, 9, 30]);
  });

  it('gives a compartment past its save-by no urgency', () => {
    const lost = aCallRow(1);
    const ranked = new Ranking().rank([lost, aCallRow(90)], NOW + 70 * 60_000, DEFAULT_WEIGHING);
    expect(ranked.map(({ call }) => call.number)).toEqual([90, 1]);
    expect(ranked[1]?.urgency.lossPerMinuteCents).toBe(0);
  });

  it('weighs medicine by the settings', () => {
    const medicine = aCallRow(2, {
      units: [
        {
          id: '1',
          kind: 'medicine-fridge',
          compartments: [
            {
              kind: 'medicine',
              valueCents: 6_000,
              atRiskAt: NOW,
              earliestAt: NOW,
              likelyAt: NOW + 3_600_000,
              saveByAt: NOW + 3_600_000,
            },
          ],
        },
      ],
    });
    const lossAt = (weight: number): number | undefined =>
      new Ranking().rank([medicine], NOW, {
        ...DEFAULT_WEIGHING,
        weights: { ...DEFAULT_WEIGHING.weights, medicine: weight },
      })[0]?.urgency.lossPerMinuteCents;
    expect(lossAt(1)).toBe(100); // 6,000 cents over 60 minutes
    expect(lossAt(4)).toBe(400);
  });

  it('works out again only what changed, and everything when the minute has passed', () => {
    const ranking = new Ranking();
    const [one, two] = [aCallRow(1), aCallRow(2)];
    const before = ranking.rank([one, two], NOW, DEFAULT_WEIGHING);
    const changed = { ...two, name: 'changed' };
    const after = ranking.rank([one, changed], NOW, DEFAULT_WEIGHING);
    expect(after[0]).toBe(before[0]);
    expect(after[1]).not.toBe(before[1]);
    expect(ranking.rank([one, changed], NOW + 60_000, DEFAULT_WEIGHING)[0]).not.toBe(before[0]);
  });

  it('looks at the units of each call once, however often the order compares it', () => {
    let looks = 0;
    const watched = (number: number): CallRow => {
      const { units, ...call } = aCallRow(number);
      return {
        ...call,
        get units() {
          looks += 1;
          return units;
        },
      };
    };
    const calls = Array.from({ length: 300 }, (_, i) => watched(((i * 79) % 300) + 1));
    const ranking = new Ranking();
    ranking.rank(calls, NOW, DEFAULT_WEIGHING);
    expect(looks).toBe(300);
    ranking.rank([...calls, watched(301)], NOW, DEFAULT_WEIGHING);
    expect(looks).toBe(301);
  });
});
