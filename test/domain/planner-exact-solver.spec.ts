import loadHighs from 'highs';
import { exactPlan } from '../support/exact-plan';
import { randomProblem } from '../support/random-problem';
import { columnsOf, setPartition } from '../support/set-partition';
import { smallProblems } from '../support/small-problems';

describe('the exact search', () => {
  it('chooses what a solver of whole-number programs chooses among the same sets', async () => {
    const solver = await loadHighs();
    for (const options of smallProblems(10)) {
      const problem = randomProblem(options);
      const { columns, fixed } = columnsOf(problem);
      const solved = solver.solve(setPartition(problem, columns), { mip_rel_gap: 0 });
      expect(solved.Status).toBe('Optimal');
      expect(solved.ObjectiveValue + fixed).toBeCloseTo(exactPlan(problem).cost, 4);
    }
  });
});
