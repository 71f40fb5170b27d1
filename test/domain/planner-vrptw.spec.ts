import { checkPlan } from '@shared/domain/planner/check-plan';
import { plan } from '@shared/domain/planner/plan';
import { SHORTEST_FOUND, solomonNames, solomonProblem } from '../support/solomon';

describe('plan, on published routing instances', () => {
  const names = solomonNames();
  if (names.length === 0) {
    it.skip('needs THAWLINE_TEST_DATA with a folder vrptw', () => undefined);
    return;
  }
  it.each(names)('serves everybody in time in %s, within 5 % of the shortest way found', (name) => {
    const problem = solomonProblem(name);
    const result = plan(problem, { iterations: 4000, seed: 1 });
    const check = checkPlan(problem, result);
    expect(check.violations).toEqual([]);
    expect(result.unassigned).toEqual([]);
    expect(check.lateness).toBe(0);
    const known = SHORTEST_FOUND[name];
    if (known !== undefined) expect(check.travel / 10 / known).toBeLessThan(1.05);
  });
});
