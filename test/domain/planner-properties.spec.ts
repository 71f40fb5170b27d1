import fc from 'fast-check';
import { partsOf } from '@shared/domain/planner/job-parts';
import { plan } from '@shared/domain/planner/plan';
import type { Plan, PlanProblem } from '@shared/domain/planner/problem';
import { checkPlan } from '@shared/domain/planner/check-plan';
import { randomProblem } from '../support/random-problem';

const problems = fc
  .record({
    seed: fc.integer({ min: 1, max: 1_000_000 }),
    jobs: fc.integer({ min: 0, max: 45 }),
    technicians: fc.integer({ min: 0, max: 6 }),
    shifts: fc.integer({ min: 1, max: 2 }),
    frozenShare: fc.constantFrom(0, 0.5, 1),
    everything: fc.boolean(),
  })
  .map(randomProblem);

const stopsOf = (result: Pick<Plan, 'routes'>): string[] =>
  result.routes.flatMap((route) => route.stops.map((stop) => stop.job));

/** What can be said of any plan, whatever its problem. */
function expectSound(problem: PlanProblem, result: Plan): void {
  const score = checkPlan(problem, result);
  expect(score.violations).toEqual([]);
  expect(Math.abs(score.cost - result.cost)).toBeLessThan(0.005);

  const planned = stopsOf(result);
  expect(new Set(planned).size).toBe(planned.length);
  expect([...planned, ...result.unassigned.map(({ job }) => job)].sort()).toEqual(
    problem.jobs.map(({ id }) => id).sort(),
  );
  for (const technician of problem.technicians) {
    const routes = result.routes.filter((route) => route.technician === technician.id);
    const first = routes.find((route) => route.shift === 0)?.stops.map((stop) => stop.job) ?? [];
    expect(first.slice(0, technician.frozen.length)).toEqual(technician.frozen);
    const free = stopsOf({ routes }).filter((id) => !technician.frozen.includes(id));
    const jobs = free.map((id) => problem.jobs.find((job) => job.id === id)!);
    for (const job of jobs)
      expect(technician.skills).toEqual(expect.arrayContaining([...job.skills]));
    for (const part of ['start-relay', 'control-board']) {
      const taken = stopsOf({ routes })
        .flatMap((id) => partsOf(problem.jobs.find((job) => job.id === id)!))
        .filter((one) => one === part).length;
      const frozenOnly = jobs.every((job) => !partsOf(job).includes(part));
      if (!frozenOnly && !problem.shop)
        expect(taken).toBeLessThanOrEqual(technician.parts[part] ?? 0);
    }
    for (const route of routes) {
      const limit = technician.shifts[route.shift]!.end + 3600;
      const onlyAccepted = route.shift === 0 && route.stops.length === technician.frozen.length;
      if (!onlyAccepted) expect(route.end).toBeLessThanOrEqual(limit);
    }
  }
}

describe('plan', () => {
  it('keeps every rule, and agrees with the independent checker to the cent', () => {
    fc.assert(
      fc.property(
        problems,
        fc.integer({ min: 0, max: 400 }),
        fc.integer(),
        (problem, iterations, seed) => {
          expectSound(problem, plan(problem, { iterations, seed }));
        },
      ),
      { numRuns: 60 },
    );
  });

  it('is the same for the same problem, seed and number of rounds', () => {
    fc.assert(
      fc.property(problems, fc.integer(), (problem, seed) => {
        const options = { iterations: 200, seed };
        expect(plan(problem, options)).toEqual(plan(problem, options));
      }),
      { numRuns: 10 },
    );
  });

  it('never costs more than the previous plan priced afresh', () => {
    fc.assert(
      fc.property(problems, fc.integer({ min: 0, max: 30 }), (problem, iterations) => {
        const previous = plan(problem, { iterations: 60, seed: 1 });
        const again = { ...problem, previous };
        const result = plan(again, { iterations, seed: 2 });
        expectSound(again, result);
        expect(result.cost).toBeLessThanOrEqual(checkPlan(again, previous).cost + 0.005);
      }),
      { numRuns: 60 },
    );
  });

  it('repairs a plan after the day has moved on: calls gone, a technician lost, stops accepted', () => {
    fc.assert(
      fc.property(problems, fc.integer({ min: 0, max: 3 * 3600 }), (problem, later) => {
        const previous = plan(problem, { iterations: 60, seed: 1 });
        const lost = problem.technicians.length > 1 ? problem.technicians[0]!.id : undefined;
        const technicians = problem.technicians
          .filter(({ id }) => id !== lost)
          .map((technician) => {
            const route = previous.routes.find(
              ({ technician: id, shift }) => id === technician.id && shift === 0,
            );
            return {
              ...technician,
              frozen: (route?.stops ?? []).slice(0, 2).map(({ job }) => job),
            };
          });
        const accepted = new Set(technicians.flatMap(({ frozen }) => frozen));
        const changed: PlanProblem = {
          ...problem,
          now: problem.now + later,
          technicians,
          jobs: problem.jobs.filter(({ id }, index) => accepted.has(id) || index % 4 !== 0),
          previous,
        };
        expectSound(changed, plan(changed, { iterations: 100, seed: 5 }));
      }),
      { numRuns: 40 },
    );
  });

  it('finds no worse a plan with more rounds from the same start', () => {
    const problem = randomProblem({ seed: 4, jobs: 60, technicians: 5 });
    const costs = [0, 50, 4000].map((iterations) => plan(problem, { iterations, seed: 1 }).cost);
    expect(costs[1]!).toBeLessThanOrEqual(costs[0]!);
    expect(costs[2]!).toBeLessThan(costs[0]!);
  });

  it('returns the best so far when told to stop', () => {
    const problem = randomProblem({ seed: 4, jobs: 60, technicians: 5 });
    let asked = 0;
    const result = plan(problem, {
      iterations: 1_000_000,
      seed: 1,
      shouldStop: () => ++asked > 400,
    });
    // At most eight rounds for each time it was asked, and some of these in the opening.
    expect(result.iterations).toBeGreaterThan(0);
    expect(result.iterations).toBeLessThanOrEqual(400 * 8);
    expect(result.iterations % 8).toBe(0);
    expectSound(problem, result);
  });

  it('gives a sound plan, no worse than the one in force, when told to stop at once', () => {
    const before = randomProblem({ seed: 4, jobs: 60, technicians: 5 });
    const problem = { ...before, previous: plan(before, { iterations: 300, seed: 1 }) };
    const repaired = plan(problem, { iterations: 0, seed: 1 });
    const result = plan(problem, { iterations: 1000, seed: 1, shouldStop: () => true });
    expect(result.iterations).toBe(0);
    expect(result.cost).toBeLessThanOrEqual(repaired.cost);
    expectSound(problem, result);
  });

  it('ends when the share of time is used up', () => {
    const problem = randomProblem({ seed: 4, jobs: 60, technicians: 5 });
    let asked = 0;
    const result = plan(problem, {
      iterations: 1_000_000,
      seed: 1,
      progress: () => ++asked / 10,
    });
    expect(result.iterations).toBe(9 * 32);
  });
});
