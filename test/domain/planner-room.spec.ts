import { checkPlan } from '@shared/domain/planner/check-plan';
import { plan } from '@shared/domain/planner/plan';
import type { PlanJob, PlanProblem } from '@shared/domain/planner/problem';

const HOUR = 3600;
const DOORS = 12;

/** A street of doors, one technician whose two days are full of cheap visits, and a dear call. */
function fullDays(): PlanProblem {
  const doors = Array.from({ length: DOORS + 1 }, (_, index) => index);
  const visit = (loc: number): PlanJob => ({
    id: `visit-${loc}`,
    loc,
    service: HOUR,
    calledAt: 0,
    weight: 1,
    skills: [],
  });
  const dear: PlanJob = { ...visit(3), id: 'dear', deadlines: [{ at: 5 * HOUR, value: 900 }] };
  return {
    version: 1,
    now: 0,
    locations: doors.length,
    matrix: doors.map((from) => doors.map((to) => 60 * Math.abs(from - to))),
    weights: { maxOvertime: 0, unservedBase: 20 },
    jobs: [...doors.slice(1).map(visit), dear],
    technicians: [
      {
        id: 'one',
        home: 0,
        at: 0,
        availableAt: 0,
        skills: [],
        parts: {},
        frozen: [],
        shifts: [0, 1].map((day) => ({ start: day * 24 * HOUR, end: (day * 24 + 7) * HOUR })),
      },
    ],
  };
}

describe('a call that comes in when today is full', () => {
  const problem = fullDays();
  const cheap = problem.jobs.filter(({ id }) => id !== 'dear');
  const previous = plan({ ...problem, jobs: cheap }, { iterations: 200, seed: 1 });
  const startOf = ({ routes }: Pick<typeof previous, 'routes'>): number | undefined =>
    routes.flatMap(({ stops }) => stops).find(({ job }) => job === 'dear')?.start;

  it('is found no room by putting it in', () => {
    const repaired = plan({ ...problem, previous }, { iterations: 0, seed: 1 });
    expect(startOf(repaired) ?? Infinity).toBeGreaterThan(5 * HOUR);
  });

  it('takes the place of a cheap visit with one round of search', () => {
    const found = plan({ ...problem, previous }, { iterations: 1, seed: 1 });
    expect(startOf(found)).toBeLessThanOrEqual(5 * HOUR);
    expect(checkPlan(problem, found).violations).toEqual([]);
  });
});
