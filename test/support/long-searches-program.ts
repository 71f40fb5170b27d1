import { checkPlan } from '@shared/domain/planner/check-plan';
import { plan } from '@shared/domain/planner/plan';
import type { LongSearch, SolomonFigures } from './long-searches';
import { gapToExact, smallProblems } from './small-problems';
import { solomonProblem } from './solomon';

/** Reads one `LongSearch` from the command line and prints its answer as JSON. */
const asked = JSON.parse(process.argv[2] ?? '') as LongSearch;
process.stdout.write(
  JSON.stringify(
    asked.kind === 'gaps-to-exact'
      ? smallProblems(asked.problems).map((options) => gapToExact(options, asked.iterations))
      : asked.names.map((name) => solomonFigures(name, asked.iterations)),
  ),
);

function solomonFigures(name: string, iterations: number): SolomonFigures {
  const problem = solomonProblem(name);
  const result = plan(problem, { iterations, seed: 1 });
  const { violations, lateness, travel } = checkPlan(problem, result);
  return { name, violations, unassigned: result.unassigned.length, lateness, travel };
}
