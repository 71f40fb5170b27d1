import { plan } from '@shared/domain/planner/plan';
import {
  NO_WAY_SECONDS,
  type PlanJob,
  type PlanProblem,
  type PlanTechnician,
} from '@shared/domain/planner/problem';
import { checkPlan } from '@shared/domain/planner/check-plan';
import { doorToDoor, roadTravel } from '@shared/domain/travel/road-travel';

const NO = NO_WAY_SECONDS;
const HOUR = 3600;

const job = (id: string, loc: number, skills: readonly string[] = []): PlanJob => ({
  id,
  loc,
  service: 1800,
  calledAt: 0,
  weight: 1,
  skills,
});
const technician = (id: string, home: number, skills: readonly string[] = []): PlanTechnician => ({
  id,
  home,
  at: home,
  availableAt: 0,
  skills,
  parts: {},
  shifts: [{ start: 0, end: 10 * HOUR }],
  frozen: [],
});

function solve(matrix: number[][], jobs: PlanJob[], technicians: PlanTechnician[]) {
  const problem: PlanProblem = {
    version: 1,
    now: 0,
    locations: matrix.length,
    matrix,
    jobs,
    technicians,
  };
  const result = plan(problem, { iterations: 300, seed: 1 });
  expect(checkPlan(problem, result).violations).toEqual([]);
  return {
    planned: result.routes.flatMap(({ stops }) => stops.map((stop) => stop.job)).sort(),
    left: Object.fromEntries(result.unassigned.map(({ job: id, reason }) => [id, reason])),
  };
}

describe('a call that no way leads to', () => {
  it('is left out as unreachable, and the others are planned', () => {
    const { planned, left } = solve(
      [
        [0, 600, NO, 700],
        [600, 0, NO, 300],
        [NO, NO, 0, NO],
        [700, 300, NO, 0],
      ],
      [job('a', 1), job('cut off', 2), job('b', 3)],
      [technician('theo', 0)],
    );
    expect(planned).toEqual(['a', 'b']);
    expect(left).toEqual({ 'cut off': 'unreachable' });
  });

  it('is one that can be driven to and not left again, too', () => {
    const { left } = solve(
      [
        [0, 600],
        [NO, 0],
      ],
      [job('a', 1)],
      [technician('theo', 0)],
    );
    expect(left).toEqual({ a: 'unreachable' });
  });

  it('goes to whoever can reach it; and is unreachable when only others may go', () => {
    const matrix = [
      [0, NO, 600],
      [NO, 0, NO],
      [600, NO, 0],
    ];
    const both = [technician('theo', 0), technician('ilse', 1, ['sealed-system'])];
    expect(solve(matrix, [job('a', 2)], both).planned).toEqual(['a']);
    expect(solve(matrix, [job('a', 2, ['sealed-system'])], both).left).toEqual({
      a: 'unreachable',
    });
  });

  it('does not make a call with a way look unreachable when the shift is too short', () => {
    const { left } = solve(
      [
        [0, 8 * HOUR],
        [8 * HOUR, 0],
      ],
      [job('a', 1)],
      [technician('theo', 0)],
    );
    expect(left).toEqual({ a: 'no_shift' });
  });
});

describe('seconds from door to door along roads', () => {
  const [a, b] = [
    [-47.7, 36.4],
    [-47.6, 36.4],
  ] as const;

  it('are whole, rounded up, with the time to park, and nothing at the same door', () => {
    expect([...doorToDoor([a, b, a], [0, 60.2, 0, 70, 0, 70, 0, 60.2, 0], 120)]).toEqual([
      0, 181, 0, 190, 0, 190, 0, 181, 0,
    ]);
    expect(doorToDoor([a, b], [0, Infinity, 1, 0], 120)[1]).toBe(Infinity);
  });

  it('are the same for few drives as for a table', () => {
    const travel = roadTravel('Roads of here', 120, (from) =>
      from === a ? { ms: 60_200, dm: 12_345 } : { ms: 0x3fff_ffff, dm: 0x3fff_ffff },
    );
    expect([...travel.matrix([a, b])]).toEqual([0, 181, Infinity, 0]);
    expect([travel.distanceKm(a, b), travel.distanceKm(b, a)]).toEqual([1.2345, Infinity]);
    expect(travel.source).toBe('Roads of here');
  });
});
