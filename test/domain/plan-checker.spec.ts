import { checkPlan } from '@shared/domain/planner/check-plan';
import type { Plan, PlanJob, PlanProblem, PlanRoute } from '@shared/domain/planner/problem';

const HOUR = 3600;
const aJob = (id: string, loc: number, change: Partial<PlanJob> = {}): PlanJob => ({
  id,
  loc,
  service: HOUR,
  calledAt: 0,
  weight: 1,
  skills: [],
  ...change,
});

/** Home 0, shop 1, doors 2 to 4, each half an hour from the next: 0 - 1 - 2 - 3 - 4. */
const problem: PlanProblem = {
  version: 1,
  now: 0,
  locations: 5,
  matrix: [0, 1, 2, 3, 4].map((from) => [0, 1, 2, 3, 4].map((to) => Math.abs(from - to) * 1800)),
  jobs: [
    aJob('held', 2, { part: 'relay', skills: ['commercial'] }),
    aJob('near', 3, { serviceBy: { t: 1800 }, part: 'relay' }),
    aJob('far', 4, { windows: [[6 * HOUR, 7 * HOUR]], part: 'fan' }),
    aJob('other', 4, { skills: ['sealed-system'], onlyTechnicians: ['u'] }),
    aJob('left', 4, { service: 20 * HOUR }),
  ],
  technicians: [
    {
      id: 't',
      home: 0,
      at: 1,
      availableAt: 0,
      skills: ['electrical'],
      parts: { relay: 1 },
      shifts: [
        { start: 0, end: 9 * HOUR, breaks: [{ from: 3 * HOUR, to: 4 * HOUR, seconds: 1800 }] },
        { start: 24 * HOUR, end: 26 * HOUR },
      ],
      frozen: ['held'],
    },
    {
      id: 'u',
      home: 4,
      at: 4,
      availableAt: HOUR,
      skills: ['sealed-system'],
      parts: {},
      shifts: [{ start: 0, end: 3 * HOUR }],
      frozen: [],
    },
  ],
  shop: { loc: 1, seconds: 600, parts: { relay: 1, fan: 1 } },
  previous: {
    routes: [
      { technician: 'u', shift: 0, stops: [{ job: 'near', start: 2 * HOUR }] },
      { technician: 'u', shift: 0, stops: [{ job: 'other', start: HOUR }] },
    ],
  },
  weights: { churnMoved: 7, churnHorizon: 2 * HOUR + 1 },
};

/**
 * By hand: 'held' from 0:30 to 1:30 takes the only relay; back to the shop by 2:00, out of it at 2:10;
 * to 'near' by 3:10, half an hour, so 3:40; the break until 4:10 where it is; on to 'far' by 4:40, where
 * the window opens at 6:00; done at 7:00, home at 9:00.
 */
const goodRoute: PlanRoute = {
  technician: 't',
  shift: 0,
  stops: [
    { job: 'held', arrive: 1800, start: 1800, finish: 5400 },
    { job: 'near', arrive: 11400, start: 11400, finish: 13200 },
    { job: 'far', arrive: 16800, start: 21600, finish: 25200 },
  ],
  halts: [
    { kind: 'shop', before: 1, start: 7200, finish: 7800, parts: { relay: 1, fan: 1 } },
    { kind: 'break', before: 2, start: 13200, finish: 15000 },
  ],
  end: 32400,
};
const otherRoute: PlanRoute = {
  technician: 'u',
  shift: 0,
  stops: [{ job: 'other', arrive: 3600, start: 3600, finish: 7200 }],
  end: 7200,
};
type Checked = Pick<Plan, 'routes' | 'unassigned'>;
const good: Checked = {
  routes: [goodRoute, otherRoute],
  unassigned: [{ job: 'left', reason: 'no_shift', because: '' }],
};

const violations = (plan: Checked, posed = problem): string =>
  checkPlan(posed, plan).violations.join(' ');
const withRoute = (change: Partial<PlanRoute>): Checked => ({
  ...good,
  routes: [{ ...goodRoute, ...change }, otherRoute],
});
const withStop = (index: number, change: object): Checked =>
  withRoute({
    stops: goodRoute.stops.map((stop, at) => (at === index ? { ...stop, ...change } : stop)),
  });
const withHalt = (index: number, change: object): Checked =>
  withRoute({
    halts: goodRoute.halts!.map((halt, at) => (at === index ? { ...halt, ...change } : halt)),
  });
const posed = (change: Partial<PlanProblem>): PlanProblem => ({ ...problem, ...change });
const [relayShop] = goodRoute.halts!;

describe('checkPlan', () => {
  it('finds nothing in the plan worked by hand, and prices it', () => {
    const check = checkPlan(problem, good);
    expect(check.violations).toEqual([]);
    expect(check.travel).toBeCloseTo((0.5 + 0.5 + 1 + 0.5 + 2) * 40, 9);
    expect(check.waiting).toBeCloseTo((0.5 + 11400 / 3600 + 6 + 1) * 2, 9);
    expect(check.churn).toBe(15 + 7); // 'near' by another technician and over half an hour later
    expect(check.unserved).toBeCloseTo(26 * 2 + 150, 9);
    expect(check.lateness + check.overtime + check.lostValue).toBe(0);
  });

  it.each<[string, Checked]>([
    ['near is reached at 11400, not at 11403', withStop(1, { arrive: 11403 })],
    ['near starts at 11400, not at 11397', withStop(1, { start: 11397 })],
    ['near ends at 13200, not at 15000', withStop(1, { finish: 15000 })],
    ['near starts at 11400, not at NaN', withStop(1, { start: NaN })],
    ['t/0 ends at 32400, not at 30600', withRoute({ end: 30600 })],
    ['The shop of t/0 starts at 7200, not at 7000', withHalt(0, { start: 7000 })],
    ['The shop of t/0 ends at 7800, not at 7200', withHalt(0, { finish: 7200 })],
    ['fetches 1 × fan, not 0', withHalt(0, { parts: { relay: 1 } })],
    ['fetches 0 × board, not 1', withHalt(0, { parts: { relay: 1, fan: 1, board: 1 } })],
    ['The break of t/0 starts at 13200, not at 12000', withHalt(1, { start: 12000 })],
    ['The break of t/0 ends at 15000, not at 14000', withHalt(1, { finish: 14000 })],
    ['has to halt thus: shop before stop 1, break before stop 2', withHalt(1, { before: 1 })],
    ['fetches before an accepted stop', withHalt(0, { before: 0 })],
    ['does not fetch relay, fan', withRoute({ halts: goodRoute.halts!.slice(1) })],
    ['t has no relay left for near', withRoute({ halts: goodRoute.halts!.slice(1) })],
    ['t has no relay left for near', withHalt(0, { before: 2 })],
    ['stops at the shop twice', withRoute({ halts: [relayShop!, ...goodRoute.halts!] })],
    ['has to halt thus', withRoute({ halts: goodRoute.halts!.slice(0, 1) })],
    ['Job near is planned twice', withRoute({ stops: [...goodRoute.stops, goodRoute.stops[1]!] })],
    ['Unknown job x on t/0', withStop(1, { job: 'x' })],
    ['Job near is neither planned nor listed', withStop(1, { job: 'x' })],
    ['The accepted stops of t have moved', withRoute({ stops: goodRoute.stops.slice(1) })],
    ['t lacks sealed-system for other', withStop(1, { job: 'other' })],
    ['t may not go to other', withStop(1, { job: 'other' })],
    ['No shift 2 of technician t', withRoute({ shift: 2 })],
    ['No shift 0 of technician x', withRoute({ technician: 'x' })],
    ['Two routes for u/0', { ...good, routes: [...good.routes, otherRoute] }],
    ['u/0 halts without a stop', { ...good, routes: [{ ...otherRoute, stops: [], halts: [relayShop!] }] }], // prettier-ignore
    ['left is listed twice', { ...good, unassigned: [...good.unassigned, ...good.unassigned] }],
    ['other is both planned and unassigned', { ...good, unassigned: [...good.unassigned, { job: 'other', reason: 'skill', because: '' }] }], // prettier-ignore
    ['Unknown job x among the unassigned', { ...good, unassigned: [{ job: 'x', reason: 'skill', because: '' }] }], // prettier-ignore
    ['"busy" is no reason', { ...good, unassigned: [{ job: 'left', reason: 'busy' as 'skill', because: '' }] }], // prettier-ignore
  ])('refuses: %s', (words, plan) => {
    expect(violations(plan)).toContain(words);
  });

  it('refuses what the problem around a plan does not allow', () => {
    const { shop, ...withoutShop } = problem;
    expect(violations(good, withoutShop)).toContain('a shop that is not there');
    expect(violations(good, posed({ shop: { ...shop!, parts: { relay: 1 } } }))).toContain(
      'The shop has no fan left for t',
    );
    expect(violations(good, posed({ weights: { maxOvertime: 0 } }))).toBe('');
    const [t, u] = problem.technicians;
    const short = { ...t!, shifts: [{ ...t!.shifts[0]!, end: 8 * HOUR - 1 }] };
    expect(violations(good, posed({ technicians: [short, u!] }))).toContain(
      't/0 runs 3601 s into overtime',
    );
    const full = { ...t!, parts: { relay: 2, fan: 1 } };
    expect(violations(good, posed({ technicians: [full, u!] }))).toContain('shop for nothing');
  });

  it('waits for the break when the next visit would end after its last moment', () => {
    const [t] = problem.technicians;
    const early = {
      ...t!,
      frozen: [],
      shifts: [{ start: 0, end: 9 * HOUR, breaks: [{ from: HOUR, to: 5399, seconds: 600 }] }],
    };
    const alone: PlanProblem = { ...problem, jobs: [aJob('a', 2)], technicians: [early] };
    const a = (arrive: number) => ({ job: 'a', arrive, start: arrive, finish: arrive + HOUR });
    const route = { technician: 't', shift: 0, stops: [a(6000)], end: 13200 };
    const halts = [{ kind: 'break' as const, before: 0, start: 3600, finish: 4200 }];
    expect(violations({ routes: [{ ...route, halts }], unassigned: [] }, alone)).toBe('');
    // A second later it need not: the visit is over in time, and then no visit follows.
    const later = { ...early, shifts: [{ start: 0, end: 9 * HOUR, breaks: [{ from: HOUR, to: 5400, seconds: 600 }] }] }; // prettier-ignore
    const sooner = { ...route, stops: [a(1800)], end: 9000 };
    expect(violations({ routes: [sooner], unassigned: [] }, { ...alone, technicians: [later] })).toBe(''); // prettier-ignore
    // A break that could only begin too late falls away.
    const over = { ...later, availableAt: 5401 };
    const after = { ...route, stops: [a(7201)], end: 14401 };
    expect(violations({ routes: [after], unassigned: [] }, { ...alone, technicians: [over] })).toBe(''); // prettier-ignore
  });

  it('uses up a van from shift to shift, whatever the order of the list', () => {
    const [t] = problem.technicians;
    const { shop: _, ...rest } = problem;
    const two: PlanProblem = {
      ...rest,
      jobs: [aJob('a', 0, { part: 'relay' }), aJob('b', 0, { part: 'relay' })],
      technicians: [{ ...t!, at: 0, frozen: [], parts: { relay: 1 } }],
      previous: { routes: [] },
    };
    const stop = (job: string, start: number) => ({ job, arrive: start, start, finish: start + HOUR }); // prettier-ignore
    const routes = [
      { technician: 't', shift: 1, stops: [stop('b', 24 * HOUR)], end: 25 * HOUR },
      { technician: 't', shift: 0, stops: [stop('a', 0)], end: HOUR },
    ];
    expect(violations({ routes, unassigned: [] }, two)).toBe('t has no relay left for b.');
  });
});
