import { checkPlan } from '@shared/domain/planner/check-plan';
import { plan } from '@shared/domain/planner/plan';
import type { PlanJob, PlanProblem } from '@shared/domain/planner/problem';
import { randomProblem } from '../support/random-problem';
import { gapToExact, smallProblems } from '../support/small-problems';
import { madeRouting } from '../support/made-routing';
import { SHORTEST_FOUND, solomonNames, solomonProblem } from '../support/solomon';
import { MADE_ROUTING, SNAPSHOT_PRICES } from './planner-references';
import { spread } from './quantiles';

/** Snapshots of a storm day: calls, technicians. */
const SNAPSHOTS = [
  [50, 5],
  [150, 12],
  [400, 20],
  [1000, 60],
] as const;
const SEEDS = [1, 2, 3];
/** Instances of which the published shortest way has to be found each time. */
const ALWAYS_SHORTEST = ['C101', 'C201'];
const MORE_SEEDS = [1, 2, 3, 4, 5];
/** Processor seconds that a plan is improved for after an event. */
const IMPROVE_SECONDS = 0.25;
const EVENTS = 20;
const EXACT_PROBLEMS = 300;

/** Processor time in seconds: the machine may be doing other things too. */
const processorSeconds = (): number => {
  const { user, system } = process.cpuUsage();
  return (user + system) / 1e6;
};
/** Asking for it takes longer than many a round of search, so only every so many times. */
const ASK_EVERY = 4;

/** A plan after so many processor seconds; throws when the checker finds a fault in it. */
function planFor(problem: PlanProblem, seconds: number, seed: number) {
  const began = processorSeconds();
  let asked = 0;
  let share = 0;
  const result = plan(problem, {
    iterations: 1e9,
    seed,
    progress: () => {
      if (asked++ % ASK_EVERY === 0) share = (processorSeconds() - began) / seconds;
      return share;
    },
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
      const best = Math.min(SNAPSHOT_PRICES[calls], ...short.map(({ cost }) => cost));
      return [
        `${calls} calls, ${technicians} technicians`,
        {
          firstPlanMs: rounded(firstMs),
          gapPercentAfter1s: short.map(({ cost }) => percent(cost, best)),
          roundsIn1s: Math.round(mean(short.map(({ iterations }) => iterations))),
          bestPriceKnown: rounded(best),
          ...eventFigures(problem, short[0]!),
        },
      ];
    }),
  );
}

/** After one new call each: the repaired plan, and the improved one. */
function eventFigures(problem: PlanProblem, previous: PlanProblem['previous'] & object) {
  const events = Array.from({ length: EVENTS }, (_, index) => {
    const like = problem.jobs[(index * 37) % problem.jobs.length]!;
    const call: PlanJob = { ...like, id: `new-${index}`, calledAt: problem.now };
    const changed = { ...problem, jobs: [...problem.jobs, call], previous };
    const repaired = timed(() => plan(changed, { iterations: 0, seed: 1 }));
    const improved = timed(() => planFor(changed, IMPROVE_SECONDS, 1));
    return {
      repairMs: repaired.ms,
      improvedMs: improved.ms,
      isBetter: improved.result.cost < repaired.result.cost,
    };
  });
  return {
    repairMs: spread(events.map(({ repairMs }) => repairMs)),
    improvedMs: spread(events.map(({ improvedMs }) => improvedMs)),
    improved: `${events.filter(({ isBetter }) => isBetter).length} of ${EVENTS}`,
  };
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
    shortestAfter1s: Object.fromEntries(
      known
        .filter((name) => ALWAYS_SHORTEST.includes(name))
        .map((name) => {
          const isShortest = MORE_SEEDS.filter((seed) => gap(name, 1, seed) <= 0.001);
          return [name, `${isShortest.length} of ${MORE_SEEDS.length} seeds`];
        }),
    ),
  };
}

/** Instances of our own, larger than the published ones at hand: the gap to the best run known. */
function madeRoutingFigures() {
  return Object.fromEntries(
    MADE_ROUTING.map(({ best, ...options }) => {
      const { cost, iterations } = planFor(madeRouting(options), 1, 1);
      const { customers, geometry, isLongDay } = options;
      return [
        `${customers} customers, ${geometry}, ${isLongDay ? 'long' : 'short'} day`,
        { gapPercentAfter1s: percent(cost, best), roundsIn1s: iterations },
      ];
    }),
  );
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
      madeRouting: madeRoutingFigures(),
    }),
  );
}

main();
