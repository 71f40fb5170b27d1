import { plan } from '@shared/domain/planner/plan';
import { exactPlan } from './exact-plan';
import { randomProblem, type RandomProblemOptions } from './random-problem';

/** Problems of up to eight calls with every kind of rule, small enough for the exact search. */
export function smallProblems(count: number): RandomProblemOptions[] {
  return Array.from({ length: count }, (_, index) => {
    const shifts = index % 5 === 0 ? 2 : 1;
    return {
      seed: index + 1,
      // Two shifts double the orders that the exact search has to try.
      jobs: shifts === 2 ? 5 + (index % 2) : 5 + (index % 4),
      technicians: 2 + (index % 2),
      shifts,
      frozenShare: index % 2 === 0 ? 0.4 : 0,
      everything: true,
    };
  });
}

/** What the planner's plan costs more than the cheapest, as a share of it. */
export function gapToExact(options: RandomProblemOptions, iterations: number): number {
  const problem = randomProblem(options);
  return plan(problem, { iterations, seed: 1 }).cost / exactPlan(problem).cost - 1;
}
