import { plan } from '@shared/domain/planner/plan';
import type { PlanJob, PlanProblem } from '@shared/domain/planner/problem';
import { checkPlan } from '@shared/domain/planner/check-plan';
import { travelMatrix } from '@shared/domain/travel/travel-times';
import { exactPlan } from '../support/exact-plan';
import { longSearch } from '../support/long-searches';
import { randomProblem } from '../support/random-problem';
import { smallProblems } from '../support/small-problems';

const HOUR = 3600;

/** One technician, no driving, nothing priced but the values. */
function bench(
  jobs: readonly { id: string; hours: number; due: number; value: number }[],
): PlanProblem {
  return {
    version: 1,
    now: 0,
    locations: 1,
    matrix: [0],
    technicians: [
      {
        id: 'only',
        home: 0,
        at: 0,
        availableAt: 0,
        skills: [],
        parts: {},
        frozen: [],
        shifts: [{ start: 0, end: 24 * HOUR }],
      },
    ],
    jobs: jobs.map(({ id, hours, due, value }): PlanJob => ({
      id,
      loc: 0,
      service: hours * HOUR,
      calledAt: 0,
      weight: 0,
      skills: [],
      // The check counts a job when it is *finished* by its due hour, the planner when it starts.
      deadlines: [{ at: (due - hours) * HOUR, value }],
    })),
  };
}

describe('plan, against the exact best', () => {
  // Jobs (hours, due, value): A (2, 3, 150), B (2, 4, 350), C (1, 4, 200), D (3, 6, 400), one
  // technician. Every order tried by hand: at most three are on time, the best value is 950.
  it('saves 950 with B, C and D in the scheduling check', () => {
    const problem = bench([
      { id: 'A', hours: 2, due: 3, value: 150 },
      { id: 'B', hours: 2, due: 4, value: 350 },
      { id: 'C', hours: 1, due: 4, value: 200 },
      { id: 'D', hours: 3, due: 6, value: 400 },
    ]);
    const result = plan(problem, { iterations: 500, seed: 1 });
    const onTime = result.routes
      .flatMap((route) => route.stops)
      .filter(
        (stop) => stop.start <= problem.jobs.find(({ id }) => id === stop.job)!.deadlines![0]!.at,
      )
      .map((stop) => stop.job);
    expect(onTime.sort()).toEqual(['B', 'C', 'D']);
    // Nothing else has a price here, so what the plan costs is what it loses of 1,100.
    expect(1100 - result.cost).toBe(950);
  });

  it('is equal to it in small problems of every kind: the first of those that `npm run bench planner` solves', async () => {
    const gaps = await longSearch({ kind: 'gaps-to-exact', problems: 60, iterations: 20_000 });
    expect(gaps).toHaveLength(60);
    expect(Math.min(...gaps)).toBeGreaterThanOrEqual(-1e-9);
    expect(Math.max(...gaps)).toBeLessThanOrEqual(0.01);
    expect(gaps.filter((gap) => gap > 1e-9).length).toBeLessThanOrEqual(0.01 * gaps.length);
  });

  it('needs no search where all can be tried: few calls and no stop at a shop', () => {
    const problems = smallProblems(16).map((options) =>
      randomProblem({ ...options, everything: false }),
    );
    for (const problem of problems) {
      const result = plan(problem, { iterations: 1, seed: 1 });
      expect(result.iterations).toBe(0);
      expect(checkPlan(problem, result).violations).toEqual([]);
      expect(result.cost).toBeCloseTo(exactPlan(problem).cost, 6);
      // What is the cheapest already stays as it is.
      const again = plan({ ...problem, previous: result }, { iterations: 1, seed: 2 });
      expect(again.routes).toEqual(result.routes);
    }
  });

  it('is priced by the scorer exactly as by the exact search', () => {
    for (const options of smallProblems(40)) {
      const problem = randomProblem(options);
      const best = exactPlan(problem);
      const planned = new Set(best.routes.flatMap((route) => route.jobs));
      const scored = checkPlan(problem, {
        routes: best.routes
          .filter((route) => route.jobs.length > 0)
          .map(({ technician, shift, jobs, shopBefore }) => ({
            technician,
            shift,
            end: 0,
            stops: jobs.map((job) => ({ job, arrive: 0, start: 0, finish: 0 })),
            halts:
              shopBefore === null
                ? []
                : [{ kind: 'shop' as const, before: shopBefore, start: 0, finish: 0 }],
          })),
        unassigned: problem.jobs
          .filter(({ id }) => !planned.has(id))
          .map(({ id }) => ({ job: id, reason: 'capacity', because: '' })),
      });
      expect(scored.cost).toBeCloseTo(best.cost, 6);
      // No times, breaks and parts were claimed above, so those are the only faults that may be found.
      const others = / not at |has to halt thus|fetches \d+ ×/;
      expect(scored.violations.filter((one) => !others.test(one))).toEqual([]);
    }
  });
});

describe('plan, on a line of doors', () => {
  it('drives out and back once when nothing else counts', () => {
    const points = [0, 1, 2, 3, 4, 5, 6].map((step) => [-38 + step / 50, 31] as const);
    const problem: PlanProblem = {
      version: 1,
      now: 0,
      locations: points.length,
      matrix: travelMatrix(points, { stopSeconds: 0 }),
      weights: { waitPerHour: 0 },
      technicians: [
        {
          id: 'one',
          home: 0,
          at: 0,
          availableAt: 0,
          skills: [],
          parts: {},
          frozen: [],
          shifts: [{ start: 0, end: 24 * HOUR }],
        },
      ],
      jobs: [4, 2, 6, 1, 5, 3].map((loc) => ({
        id: `door-${loc}`,
        loc,
        service: 600,
        calledAt: 0,
        weight: 1,
        skills: [],
      })),
    };
    const { cost } = plan(problem, { iterations: 300, seed: 3 });
    const farthest = problem.matrix as Float64Array;
    // Out to the last door and home; rounding up each leg may add a second a stop.
    const leastDollars = (2 * farthest[6]! * 40) / 3600;
    expect(cost - leastDollars).toBeGreaterThanOrEqual(-0.2);
    expect(cost - leastDollars).toBeLessThanOrEqual(0.2);
  });
});
