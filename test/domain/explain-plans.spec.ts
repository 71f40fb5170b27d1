import { checkPlan } from '@shared/domain/planner/check-plan';
import { moveGains } from '@shared/domain/planner/explain-moves';
import { explainUnplanned } from '@shared/domain/planner/explain-unplanned';
import { partProblem } from '@shared/domain/planner/part-problem';
import { plan } from '@shared/domain/planner/plan';
import { weightsOf } from '@shared/domain/planner/plan-prices';
import {
  DEFAULT_WEIGHTS,
  type PlanJob,
  type PlanProblem,
  type PlanTechnician,
} from '@shared/domain/planner/problem';

const HOUR = 3600;
const PLACES = 8;
/** Places along one road, ten minutes from each to the next. */
const MATRIX = Array.from({ length: PLACES }, (_, from) =>
  Array.from({ length: PLACES }, (__, to) => Math.abs(from - to) * 600),
);
const job = (id: string, loc: number, told: Partial<PlanJob> = {}): PlanJob => ({
  id,
  loc,
  service: HOUR,
  calledAt: 0,
  weight: 1,
  skills: [],
  ...told,
});
const technician = (id: string, told: Partial<PlanTechnician> = {}): PlanTechnician => ({
  id,
  home: 0,
  at: 0,
  availableAt: 0,
  skills: [],
  parts: {},
  shifts: [{ start: 0, end: 8 * HOUR }],
  frozen: [],
  ...told,
});
const problem = (told: Partial<PlanProblem>): PlanProblem => ({
  version: 1,
  now: 0,
  locations: PLACES,
  matrix: MATRIX,
  jobs: [],
  technicians: [technician('theo')],
  ...told,
});
const OPTIONS = { iterations: 200, seed: 1 };
const whyOf = (asked: PlanProblem, id: string) =>
  explainUnplanned(asked, plan(asked, OPTIONS)).find((one) => one.job === id);

describe('explainUnplanned', () => {
  it('finds who could go if they had the skill, and until when that saves something', () => {
    const asked = problem({
      jobs: [job('a', 3, { skills: ['sealed-system'], deadlines: [{ at: 2 * HOUR, value: 300 }] })],
      technicians: [technician('far', { at: 7 }), technician('near', { at: 2 })],
    });
    expect(whyOf(asked, 'a')).toMatchObject({
      cheapest: null,
      helps: [
        {
          kind: 'skill',
          technician: 'near',
          start: 600,
          before: 2 * HOUR,
          skills: ['sealed-system'],
        },
      ],
    });
  });

  it('finds the van that lacks the part, and the one who gave the call back', () => {
    const asked = problem({
      jobs: [job('a', 3, { part: 'start-relay' }), job('b', 4, { onlyTechnicians: ['nobody'] })],
    });
    expect(whyOf(asked, 'a')?.helps).toMatchObject([{ kind: 'part', parts: ['start-relay'] }]);
    expect(whyOf(asked, 'b')?.helps).toMatchObject([{ kind: 'declined', technician: 'theo' }]);
  });

  it('finds the overtime that would do, and says what the call would cost others without it', () => {
    // Two visits of an hour with their drives fill the shift and its hour of overtime; a third does not fit.
    const asked = problem({
      jobs: [
        job('a', 1, { deadlines: [{ at: HOUR, value: 500 }] }),
        job('b', 2, { deadlines: [{ at: 3 * HOUR, value: 500 }] }),
        job('c', 3),
      ],
      technicians: [technician('theo', { shifts: [{ start: 0, end: 2.4 * HOUR }] })],
    });
    const made = plan(asked, OPTIONS);
    expect(made.unassigned.map((left) => left.job)).toEqual(['c']);
    const [help] = whyOf(asked, 'c')?.helps ?? [];
    expect(help).toMatchObject({ kind: 'overtime', technician: 'theo' });
    // 10 min + 60 + 10 + 60 + 10 + 60, and 30 home: four hours in a shift of 2 h 24.
    expect(help?.overtimeMinutes).toBe(96);
  });

  it('looks at the dearest calls first and stops when it is told to', () => {
    const asked = problem({
      jobs: [1, 2, 3].map((n) =>
        job(String(n), n, { skills: ['x'], deadlines: [{ at: HOUR, value: n * 100 }] }),
      ),
    });
    let looks = 0;
    const answers = explainUnplanned(asked, plan(asked, OPTIONS), () => ++looks > 2);
    expect(answers.map((one) => one.job)).toEqual(['3', '2']);
  });
});

describe('moveGains', () => {
  it('prices a call on a route against leaving it out', () => {
    const asked = problem({ jobs: [job('a', 2)], previous: { routes: [] } });
    const made = plan(asked, OPTIONS);
    const without = checkPlan(asked, {
      routes: [],
      unassigned: [{ job: 'a', reason: 'capacity', because: '' }],
    });
    const [gain] = moveGains(asked, made);
    expect(gain).toMatchObject({ job: 'a', kind: 'added' });
    expect(gain?.gain).toBeCloseTo(without.cost - checkPlan(asked, made).cost, 6);
  });

  it('prices a change of technician against the best place on the route of before', () => {
    const asked = problem({
      jobs: [job('a', 6)],
      technicians: [technician('theo'), technician('ilse', { at: 7, home: 7 })],
      previous: {
        routes: [{ technician: 'theo', shift: 0, stops: [{ job: 'a', start: HOUR }] }],
      },
      // Nothing is promised: only driving and waiting count.
      weights: { churnHorizon: 0 },
    });
    const [gain] = moveGains(asked, plan(asked, OPTIONS));
    expect(gain).toMatchObject({ job: 'a', kind: 'to-other-technician' });
    // Twelve places less there and back at 40 an hour, and five less of waiting at 2.
    const { travelPerHour, waitPerHour } = DEFAULT_WEIGHTS;
    expect(gain?.gain).toBeCloseTo((10 * 600 * travelPerHour + 5 * 600 * waitPerHour) / HOUR, 6);
  });
});

describe('partProblem', () => {
  it('prices the same routes the same', () => {
    const asked = problem({
      jobs: [1, 2, 5, 6].map((loc) => job(String(loc), loc)),
      technicians: [technician('theo'), technician('ilse', { at: 7, home: 7 })],
    });
    const made = plan(asked, OPTIONS);
    const parts = ['theo', 'ilse'].map((id) => {
      const { problem: part, routes } = partProblem(asked, made, [id]);
      return checkPlan(part, { routes, unassigned: [] });
    });
    expect(parts.flatMap(({ violations }) => violations)).toEqual([]);
    expect(parts[0]!.cost + parts[1]!.cost).toBeCloseTo(checkPlan(asked, made).cost, 6);
  });
});

describe('weightsOf', () => {
  it('counts in seconds what the manager sets in minutes', () => {
    expect(
      weightsOf({
        driveDollarsPerHour: 40,
        waitDollarsPerHour: 2,
        lateDollars: 30,
        lateDollarsPerHour: 60,
        overtimeDollarsPerHour: 90,
        mostOvertimeMinutes: 60,
        leftOutDollars: 150,
        otherTechnicianDollars: 15,
        otherTimeDollars: 0,
        otherTimeMinutes: 30,
        promisedAheadMinutes: 120,
      }),
    ).toEqual(DEFAULT_WEIGHTS);
  });
});
