import { checkPlan } from '@shared/domain/planner/check-plan';
import { plan } from '@shared/domain/planner/plan';
import type { PlanJob, PlanProblem } from '@shared/domain/planner/problem';
import { randomProblem } from '../support/random-problem';
import { gapToExact, smallProblems } from '../support/small-problems';
import { SHORTEST_FOUND, solomonNames, solomonProblem } from '../support/solomon';
import { spread } from './quantiles';

/** Snapshots of a storm day: calls, technicians. */
const SNAPSHOTS = [
  [50, 5],
  [150, 12],
  [400, 20],
  [1000, 60],
] as const;
const SEEDS = [1, 2, 3];
/** Processor seconds of the run that a snapshot's gaps are measured by. */
const LONG_SECONDS = 60;
const EVENTS = 20;
const EXACT_PROBLEMS = 300;

/** Processor time in seconds: the machine may be doing other things too. */
const processorSeconds = (): number => {
  const { user, system } = process.cpuUsage();
  return (user + system) / 1e6;
};

/** A plan after so many processor seconds; throws when the checker finds a fault in it. */
function planFor(problem: PlanProblem, seconds: number, seed: number) {
  const began = processorSeconds();
  const result = plan(problem, {
    iterations: 1e9,
    seed,
    progress: () => (processorSeconds() - began) / seconds,
  });
  const { violations, travel } = checkPlan(problem, result);
  if (violations.length > 0) throw new Error(violations.join(' '));
  return { ...result, travel };
}

const rounded = (value: number): number => Math.round(value * 1000) / 1000;
const percent = (value: number, reference: number): number =>
  rounded(100 * (value / reference - 1));
const mean = (values: readonly number[]): number =>
  values.reduce((sum, value) => sum + value, 0) / values.length;

function snapshotFigures() {
  return Object.fromEntries(
    SNAPSHOTS.map(([calls, technicians]) => {
      const problem = randomProblem({ seed: 7, jobs: calls, technicians, frozenShare: 0.5 });
      const firstMs = timed(() => plan(problem, { iterations: 0, seed: 1 })).ms;
      const short = SEEDS.map((seed) => planFor(problem, 1, seed));
      const long = planFor(problem, LONG_SECONDS, 9);
      const best = Math.min(long.cost, ...short.map(({ cost }) => cost));
      const events = eventFigures(problem, long);
      return [
        `${calls} calls, ${technicians} technicians`,
        {
          firstPlanMs: rounded(firstMs),
          gapPercentAfter1s: short.map(({ cost }) => percent(cost, best)),
          roundsIn1s: Math.round(mean(short.map(({ iterations }) => iterations))),
          priceAfter60s: rounded(long.cost),
          repairMs: spread(events),
        },
      ];
    }),
  );
}

/** Milliseconds of a repair after one new call each. */
function eventFigures(problem: PlanProblem, previous: PlanProblem['previous'] & object): number[] {
  return Array.from({ length: EVENTS }, (_, index) => {
    const like = problem.jobs[(index * 37) % problem.jobs.length]!;
    const call: PlanJob = { ...like, id: `new-${index}`, calledAt: problem.now };
    const changed = { ...problem, jobs: [...problem.jobs, call], previous };
    return timed(() => plan(changed, { iterations: 0, seed: 1 })).ms;
  });
}

function timed<T>(work: () => T): { readonly ms: number; readonly result: T } {
  const began = processorSeconds();
  const result = work();
  return { ms: (processorSeconds() - began) * 1000, result };
}

function distanceFigures() {
  const names = solomonNames();
  if (names.length === 0) return 'needs THAWLINE_TEST_DATA with a folder vrptw';
  const gap = (name: string, seconds: number, seed: number): number => {
    const reference = SHORTEST_FOUND[name];
    const { travel, unassigned } = planFor(solomonProblem(name), seconds, seed);
    if (reference === undefined || unassigned.length > 0) return NaN;
    return percent(travel / 10, reference);
  };
  const known = names.filter((name) => SHORTEST_FOUND[name] !== undefined);
  const after1s = known.map((name) => SEEDS.map((seed) => gap(name, 1, seed)));
  const after10s = known.map((name) => gap(name, 10, 1));
  return {
    gapPercentAfter1s: Object.fromEntries(known.map((name, index) => [name, after1s[index]])),
    meanGapPercentAfter1s: rounded(mean(after1s.flat())),
    gapPercentAfter10s: Object.fromEntries(known.map((name, index) => [name, after10s[index]])),
    meanGapPercentAfter10s: rounded(mean(after10s)),
  };
}

function exactFigures() {
  const gaps = smallProblems(EXACT_PROBLEMS).map((options) => gapToExact(options, 20_000));
  return {
    problems: gaps.length,
    equal: gaps.filter((gap) => Math.abs(gap) < 1e-9).length,
    below: gaps.filter((gap) => gap < -1e-9).length,
    worstPercent: rounded(100 * Math.max(...gaps)),
  };
}

/** The planner's plans against the exact best, long runs of its own, and published routing instances. */
function main(): void {
  // Once for the compiler, so that the first figures are not its.
  planFor(randomProblem({ seed: 99, jobs: 150, technicians: 12, everything: true }), 2, 1);
  process.stdout.write(
    JSON.stringify({
      seconds: 'processor time of one core',
      exact: exactFigures(),
      snapshots: snapshotFigures(),
      distances: distanceFigures(),
    }),
  );
}

main();
