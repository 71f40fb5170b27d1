import { MalformedProblem } from '@shared/domain/planner/compiled-problem';
import { plan } from '@shared/domain/planner/plan';
import { movesBetween, stopReasons, summarisePlan } from '@shared/domain/planner/plan-summary';
import type { PlanJob, PlanProblem, PlanTechnician } from '@shared/domain/planner/problem';
import { checkPlan } from '@shared/domain/planner/check-plan';

const HOUR = 3600;

/** Three places in a row, a quarter of an hour apart. */
const MATRIX = [0, 900, 1800, 900, 0, 900, 1800, 900, 0];

const aJob = (id: string, change: Partial<PlanJob> = {}): PlanJob => ({
  id,
  loc: 1,
  service: HOUR,
  calledAt: 0,
  weight: 1,
  skills: [],
  ...change,
});

const aTechnician = (id: string, change: Partial<PlanTechnician> = {}): PlanTechnician => ({
  id,
  home: 0,
  at: 0,
  availableAt: 0,
  skills: [],
  parts: {},
  shifts: [{ start: 0, end: 8 * HOUR }],
  frozen: [],
  ...change,
});

const aProblem = (
  jobs: readonly PlanJob[],
  technicians: readonly PlanTechnician[],
  change: Partial<PlanProblem> = {},
): PlanProblem => ({
  version: 1,
  now: 0,
  locations: 3,
  matrix: MATRIX,
  jobs,
  technicians,
  ...change,
});

const planned = (problem: PlanProblem) => plan(problem, { iterations: 300, seed: 1 });
const reasons = (problem: PlanProblem) =>
  planned(problem).unassigned.map(({ job, reason }) => `${job}: ${reason}`);

describe('the price of a plan', () => {
  it('is the sum worked by hand', () => {
    const problem = aProblem(
      [
        aJob('food', {
          calledAt: -2 * HOUR,
          weight: 2,
          deadlines: [
            { at: 600, value: 200 },
            { at: 900, value: 400 },
          ],
        }),
        aJob('late', { loc: 2, windows: [[0, HOUR]] }),
        aJob('left', { skills: ['commercial'], weight: 5, deadlines: [{ at: HOUR, value: 70 }] }),
      ],
      [aTechnician('t', { shifts: [{ start: 0, end: 2.5 * HOUR }] })],
    );
    const score = checkPlan(problem, {
      routes: [
        {
          technician: 't',
          shift: 0,
          // 15 min out, an hour of work, 15 min on, an hour of work, 30 min home
          stops: [
            { job: 'food', arrive: 900, start: 900, finish: 4500 },
            { job: 'late', arrive: 5400, start: 5400, finish: 9000 },
          ],
          end: 10800,
        },
      ],
      unassigned: [{ job: 'left', reason: 'skill', because: '' }],
    });
    expect(score.violations).toEqual([]);
    expect(score.travel).toBeCloseTo(40, 9); // 1 h × 40
    expect(score.waiting).toBeCloseTo(2.25 * 2 * 2 + 1.5 * 2, 9);
    expect(score.lostValue).toBe(200); // a start at the second deadline keeps its value
    expect(score.lateness).toBeCloseTo(30 + 0.5 * 60, 9);
    expect(score.overtime).toBeCloseTo(0.5 * 90, 9);
    expect(score.unserved).toBeCloseTo(70 + 5 * (2.5 * 2 + 150), 9);
    expect(score.cost).toBeCloseTo(40 + 12 + 200 + 60 + 45 + 845, 9);
  });
});

describe('the checker refuses', () => {
  const problem = aProblem(
    [aJob('a'), aJob('b', { skills: ['electrical'], part: 'start-relay' }), aJob('c', { loc: 2 })],
    [aTechnician('t', { frozen: ['a'] }), aTechnician('u', { skills: ['electrical'] })],
  );
  const stop = (job: string, start: number) => ({
    job,
    arrive: start,
    start,
    finish: start + HOUR,
  });
  const good = { technician: 't', shift: 0, stops: [stop('a', 900)], end: 5400 };
  const left = (...ids: string[]) =>
    ids.map((job) => ({ job, reason: 'capacity' as const, because: '' }));

  it.each([
    [
      'a job planned twice',
      [{ ...good, stops: [stop('a', 900), stop('a', 4500)], end: 9000 }],
      left('b', 'c'),
      'planned twice',
    ],
    ['an accepted stop that is gone', [], left('a', 'b', 'c'), 'have moved'],
    [
      'an accepted stop that is not first',
      [{ ...good, stops: [stop('c', 1800), stop('a', 6300)], end: 10800 }],
      left('b'),
      'have moved',
    ],
    [
      'a missing skill',
      [{ ...good, stops: [stop('a', 900), stop('b', 4500)], end: 9000 }],
      left('c'),
      'lacks electrical',
    ],
    [
      'a part that is not on the van',
      [good, { technician: 'u', shift: 0, stops: [stop('b', 900)], end: 5400 }],
      left('c'),
      'no start-relay',
    ],
    [
      'a claimed start that is not true',
      [{ ...good, stops: [stop('a', 600)] }],
      left('b', 'c'),
      'starts at 900',
    ],
    ['a job that is nowhere', [good], left('b'), 'c is neither'],
    ['a job that is in both lists', [good], left('a', 'b', 'c'), 'both planned'],
    ['a job that nobody asked for', [good], left('b', 'c', 'x'), 'Unknown job x'],
    ['a shift that is not there', [good, { ...good, shift: 1 }], left('b', 'c'), 'No shift 1'],
  ])('%s', (_, routes, unassigned, words) => {
    expect(checkPlan(problem, { routes, unassigned }).violations.join(' ')).toContain(words);
  });

  it('overtime past the limit', () => {
    const long = aProblem([aJob('a', { service: 9 * HOUR })], [aTechnician('t')]);
    const route = { ...good, stops: [{ ...stop('a', 900), finish: 33300 }], end: 34200 };
    expect(checkPlan(long, { routes: [route], unassigned: [] }).violations.join()).toContain(
      'overtime',
    );
  });

  it('nothing in a sound plan', () => {
    expect(checkPlan(problem, planned(problem)).violations).toEqual([]);
  });
});

describe('a call on no route', () => {
  it('says that nobody has the skill, or may go', () => {
    const jobs = [aJob('a', { skills: ['commercial'] }), aJob('b', { onlyTechnicians: ['away'] })];
    expect(reasons(aProblem(jobs, [aTechnician('t')]))).toEqual(['a: skill', 'b: skill']);
  });

  it('says that no van has the part, or has it left', () => {
    const jobs = [
      aJob('a', { part: 'control-board' }),
      aJob('b', { part: 'start-relay', weight: 5 }),
      aJob('c', { part: 'start-relay' }),
    ];
    const problem = aProblem(jobs, [aTechnician('t', { parts: { 'start-relay': 1 } })]);
    expect(reasons(problem)).toEqual(['a: part', 'c: part']);
    expect(planned(problem).unassigned.map(({ because }) => because)).toEqual([
      'No van of those who may go carries: control-board.',
      'Other visits take the last on the vans of: start-relay.',
    ]);
  });

  it('knows that two repairs share the last part, and brings both from the shop', () => {
    const jobs = [
      aJob('a', { parts: ['start-relay'], weight: 2 }),
      aJob('b', { parts: ['start-relay', 'control-board', 'control-board'] }),
    ];
    const technician = aTechnician('t', { parts: { 'start-relay': 1, 'control-board': 2 } });
    const alone = aProblem(jobs, [technician]);
    expect(planned(alone).unassigned).toMatchObject([
      {
        job: 'b',
        reason: 'part',
        because: 'Other visits take the last on the vans of: start-relay and control-board (2).',
      },
    ]);
    const withShop = aProblem(jobs, [technician], { shop: { loc: 2, seconds: 300 } });
    const [route] = planned(withShop).routes;
    expect(route?.stops).toHaveLength(2);
    expect(route?.halts).toMatchObject([{ kind: 'shop', parts: { 'start-relay': 1 } }]);
    expect(checkPlan(withShop, planned(withShop)).violations).toEqual([]);
  });

  it('says that no shift is long enough', () => {
    const long = aJob('a', { service: 9 * HOUR });
    expect(reasons(aProblem([long], [aTechnician('t')]))).toEqual(['a: no_shift']);
    expect(reasons(aProblem([aJob('a')], [aTechnician('t', { shifts: [] })]))).toEqual([
      'a: no_shift',
    ]);
    expect(reasons(aProblem([aJob('a')], []))).toEqual(['a: skill']);
  });

  it('says that the time goes to visits that save more', () => {
    const jobs = [0, 1, 2].map((index) =>
      aJob(`j${index}`, { service: 3.5 * HOUR, weight: 3 - index }),
    );
    expect(reasons(aProblem(jobs, [aTechnician('t')]))).toEqual(['j2: capacity']);
  });
});

describe('accepted stops', () => {
  it('stay even when another technician stands next door and the skill is wrong', () => {
    const problem = aProblem(
      [aJob('far', { loc: 2, skills: ['commercial'] }), aJob('near')],
      [aTechnician('t', { frozen: ['far'] }), aTechnician('u', { at: 2, skills: ['commercial'] })],
    );
    const route = planned(problem).routes.find(({ technician }) => technician === 't');
    expect(route?.stops[0]?.job).toBe('far');
  });

  it('stay even when they run past the overtime limit, and nothing is added then', () => {
    const problem = aProblem(
      [aJob('long', { service: 10 * HOUR }), aJob('other')],
      [aTechnician('t', { frozen: ['long'] })],
    );
    const result = planned(problem);
    expect(result.routes[0]?.stops.map(({ job }) => job)).toEqual(['long']);
    expect(checkPlan(problem, result).violations).toEqual([]);
  });
});

describe('windows and shifts', () => {
  it('waits for the first window that is still open', () => {
    const job = aJob('a', {
      windows: [
        [0, 600],
        [2 * HOUR, 3 * HOUR],
      ],
    });
    expect(planned(aProblem([job], [aTechnician('t')])).routes[0]?.stops[0]).toMatchObject({
      arrive: 900,
      start: 2 * HOUR,
    });
  });

  it('starts at once, late, when all windows are over', () => {
    const job = aJob('a', { windows: [[0, 600]] });
    expect(planned(aProblem([job], [aTechnician('t')])).routes[0]?.stops[0]?.start).toBe(900);
  });

  it('starts a later shift from home and the first from where the technician is free', () => {
    const shifts = [
      { start: 0, end: 2.2 * HOUR },
      { start: 24 * HOUR, end: 26.2 * HOUR },
    ];
    const problem = aProblem(
      [aJob('a', { service: 1.5 * HOUR }), aJob('b', { service: 1.5 * HOUR })],
      [aTechnician('t', { at: 2, availableAt: 300, shifts })],
    );
    const result = plan(problem, { iterations: 300, seed: 1 });
    expect(result.routes.map(({ shift, stops }) => [shift, stops[0]?.arrive])).toEqual([
      [0, 300 + 900],
      [1, 24 * HOUR + 900],
    ]);
  });
});

describe('a problem that contradicts itself', () => {
  it.each([
    ['two jobs of one name', aProblem([aJob('a'), aJob('a')], [])],
    ['an accepted job that is unknown', aProblem([], [aTechnician('t', { frozen: ['x'] })])],
    [
      'one job accepted by two',
      aProblem(
        [aJob('a')],
        [aTechnician('t', { frozen: ['a'] }), aTechnician('u', { frozen: ['a'] })],
      ),
    ],
    ['a place outside the matrix', aProblem([aJob('a', { loc: 3 })], [])],
    ['a matrix of the wrong size', aProblem([], [], { matrix: [0, 1] })],
    [
      'a drive without a time',
      aProblem([], [], { matrix: MATRIX.map((s) => (s === 1800 ? NaN : s)) }),
    ],
  ])('is refused: %s', (_, problem) => {
    expect(() => planned(problem)).toThrow(MalformedProblem);
  });
});

describe('summarisePlan', () => {
  const problem = aProblem(
    [
      aJob('saved', {
        deadlines: [
          { at: HOUR, value: 400.25 },
          { at: -1, value: 99 },
        ],
      }),
      aJob('lost', { loc: 2, skills: ['commercial'], deadlines: [{ at: HOUR, value: 100 }] }),
    ],
    [aTechnician('t')],
  );

  it('counts what can still be saved, the drives and the miles', () => {
    const summary = summarisePlan(problem, planned(problem), { distanceKm: () => 16.09344 });
    expect(summary).toMatchObject({
      stopCount: 1,
      unassignedCount: 1,
      valueAtRiskCents: 50025,
      valueSavedCents: 40025,
      valueLostCents: 10000,
      driveMinutes: 30,
      lateStopCount: 0,
      overtimeMinutes: 0,
      waitHours: 0.25,
    });
    expect(summary.driveMiles).toBeCloseTo(20, 9); // two drives of ten miles
    expect(summarisePlan(problem, planned(problem)).driveMiles).toBeNull();
  });

  it('lists what moves against the plan before', () => {
    const stop = (job: string, start: number) => ({ job, start, arrive: start, finish: start });
    const route = (technician: string, ...stops: ReturnType<typeof stop>[]) => ({
      technician,
      shift: 0,
      stops,
      end: 0,
    });
    const before = {
      routes: [route('t', stop('a', 0), stop('b', 100), stop('c', 200)), route('u', stop('d', 0))],
    };
    const after = {
      routes: [
        route('t', stop('a', 1800), stop('b', 2000)),
        route('u', stop('c', 200), stop('e', 0)),
      ],
    };
    expect(movesBetween(before, after)).toEqual({
      toOtherTechnician: ['c'],
      toOtherTime: ['b'],
      added: ['e'],
      dropped: ['d'],
    });
  });

  it('says why each stop stands where it stands', () => {
    const jobs = [
      aJob('accepted'),
      aJob('window', { windows: [[0, 8 * HOUR]] }),
      aJob('food', { deadlines: [{ at: 7 * HOUR, value: 120 }] }),
      aJob('near'),
      aJob('gone', { loc: 2, deadlines: [{ at: 0, value: 120 }] }),
      aJob('plain'),
    ].map((job) => ({ ...job, service: 1800 }));
    const everything = aProblem(jobs, [aTechnician('t', { frozen: ['accepted'] })]);
    const order = ['accepted', 'window', 'food', 'near', 'gone', 'plain'];
    const stops = order.map((job, index) => ({ job, arrive: 0, start: HOUR * index, finish: 0 }));
    const reasonsByJob = stopReasons(everything, {
      routes: [{ technician: 't', shift: 0, stops, end: 0 }],
    });
    expect(
      [...reasonsByJob].map(([job, { code, words }]) => `${job} | ${code} | ${words}`),
    ).toEqual([
      'accepted | accepted | Accepted: it keeps its place.',
      'window | window | Within the agreed window.',
      'food | save-by | Saves $120; 5 h before save-by.',
      'near | on-the-way | On the way: a drive of 0 min.',
      'gone | past-save-by | Past save-by: nothing left to save, the repair still waits.',
      'plain | longest-wait | Has waited 5 h.',
    ]);
  });
});
