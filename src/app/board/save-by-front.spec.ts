/** @jest-environment node */
import { HOUR_MS } from '@shared/domain/instant';
import { shareOfHours, type StripCompartment, type StripFacts } from './cold-strip-scale';
import { frontEdge, saveByFront } from './save-by-front';

const NOW = Date.UTC(2026, 8, 3, 6, 0);
const at = (hours: number) => NOW + hours * HOUR_MS;
const aCall = (...compartments: StripCompartment[]): StripFacts => ({
  lostAt: at(-2),
  restoredAt: null,
  compartments,
});
const fresh = (hours: number): StripCompartment => ({
  kind: 'fresh-food',
  atRiskAt: at(hours - 1),
  saveByAt: at(hours),
});

describe('saveByFront', () => {
  it('counts every compartment once: in an interval, lost, or later', () => {
    const calls = [
      aCall(fresh(-1)),
      aCall(fresh(0.5), fresh(0.9)),
      aCall(fresh(1)),
      aCall(fresh(11.9)),
      aCall({ kind: 'medicine', atRiskAt: at(-1), saveByAt: null }),
      aCall({ kind: 'freezer', atRiskAt: at(30), saveByAt: at(48) }),
    ];
    const front = saveByFront(calls, NOW);
    expect(front.map(({ kind, lost, later }) => [kind, lost, later])).toEqual([
      ['fresh-food', 1, 0],
      ['freezer', 0, 1],
      ['medicine', 0, 1],
    ]);
    expect(front[0]?.bars.map(({ count }) => count)).toEqual([2, 1, 0, 0, 1, 0, 0]);
  });

  it('stands on the same ruler as every strip', () => {
    const [lane] = saveByFront([aCall(fresh(3))], NOW);
    expect(lane?.bars[2]).toMatchObject({ from: shareOfHours(2), to: shareOfHours(4), count: 1 });
  });

  it('leaves out what cooling has saved', () => {
    expect(saveByFront([{ ...aCall(fresh(3)), restoredAt: at(-1) }], NOW)).toEqual([]);
  });
});

describe('frontEdge', () => {
  it('tells the next save-by and how many calls can still be helped', () => {
    expect(frontEdge([aCall(fresh(-1)), aCall(fresh(5)), aCall(fresh(2))], NOW)).toEqual({
      savable: 2,
      nextAt: at(2),
    });
  });
});
