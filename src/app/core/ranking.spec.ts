import { Ranking } from './ranking';
import { aCallRow, NOW } from './testing';

const BUDGET_MS = 30;

describe('Ranking', () => {
  it('puts what is lost soonest first and keeps the order of arrival between equals', () => {
    const twin = aCallRow(9, { units: aCallRow(3).units });
    const ranked = new Ranking().rank([aCallRow(30), twin, aCallRow(3)], NOW, 5);
    expect(ranked.map(({ call }) => call.number)).toEqual([3, 9, 30]);
  });

  it('gives a compartment past its save-by no urgency', () => {
    const lost = aCallRow(1);
    const ranked = new Ranking().rank([lost, aCallRow(90)], NOW + 70 * 60_000, 5);
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
            { kind: 'medicine', valueCents: 6_000, atRiskAt: NOW, saveByAt: NOW + 3_600_000 },
          ],
        },
      ],
    });
    const lossAt = (weight: number): number | undefined =>
      new Ranking().rank([medicine], NOW, weight)[0]?.urgency.lossPerMinuteCents;
    expect(lossAt(1)).toBe(100); // 6,000 cents over 60 minutes
    expect(lossAt(4)).toBe(400);
  });

  it('works out again only what changed, and everything when the minute has passed', () => {
    const ranking = new Ranking();
    const [one, two] = [aCallRow(1), aCallRow(2)];
    const before = ranking.rank([one, two], NOW, 5);
    const changed = { ...two, name: 'changed' };
    const after = ranking.rank([one, changed], NOW, 5);
    expect(after[0]).toBe(before[0]);
    expect(after[1]).not.toBe(before[1]);
    expect(ranking.rank([one, changed], NOW + 60_000, 5)[0]).not.toBe(before[0]);
  });

  it(`ranks 3,000 calls within ${BUDGET_MS} ms`, () => {
    const calls = Array.from({ length: 3_000 }, (_, i) => aCallRow(((i * 7919) % 3_000) + 1));
    // The best of several: what else runs on the machine is not what is measured.
    const times = Array.from({ length: 9 }, (_, minute) => {
      const from = performance.now();
      new Ranking().rank(calls, NOW + minute * 60_000, 5);
      return performance.now() - from;
    });
    expect(Math.min(...times)).toBeLessThan(BUDGET_MS);
  });
});
