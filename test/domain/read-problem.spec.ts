import { plan } from '@shared/domain/planner/plan';
import { NO_WAY_SECONDS } from '@shared/domain/planner/problem';
import { readProblem } from '@shared/domain/planner/read-problem';

/** A problem with every field that there is. */
const whole = () => ({
  version: 1,
  now: 0,
  budgetMs: 500,
  seed: 7,
  locations: 2,
  matrix: [0, 600, 600, 0] as unknown,
  jobs: [
    {
      id: 'a',
      loc: 1,
      service: 1800,
      serviceBy: { t: 1200 },
      calledAt: -60,
      earliest: 30,
      weight: 2,
      skills: ['electrical'],
      part: 'start-relay',
      windows: [[0, 3600]],
      deadlines: [{ at: 7200, value: 200 }],
      onlyTechnicians: ['t'],
    },
  ],
  technicians: [
    {
      id: 't',
      home: 0,
      at: 0,
      availableAt: 0,
      skills: ['electrical'],
      parts: { 'start-relay': 2 },
      shifts: [
        { start: 0, end: 28800, from: 0, to: 0, breaks: [{ from: 100, to: 200, seconds: 60 }] },
      ],
      frozen: ['a'],
    },
  ],
  shop: { loc: 0, seconds: 300, parts: { 'start-relay': 9 } },
  previous: { routes: [{ technician: 't', shift: 0, stops: [{ job: 'a', start: 600 }] }] },
  weights: { travelPerHour: 50, churnMoved: 5 },
});

type Whole = ReturnType<typeof whole>;

/** The whole problem with one thing changed, as it comes out of JSON. */
function changed(change: (problem: Whole) => unknown): unknown {
  const problem = whole();
  change(problem);
  return JSON.parse(JSON.stringify(problem));
}

/** Puts a value where the types would not let it. */
const put = (target: object, name: string, value: unknown): unknown =>
  Object.assign(target, { [name]: value });

describe('readProblem', () => {
  it('takes over every field', () => {
    const { matrix, budgetMs, seed, ...rest } = whole();
    const read = readProblem(changed(() => {}));
    expect(read).toEqual({
      problem: { ...rest, matrix: Float64Array.from(matrix as number[]) },
      budgetMs,
      seed,
    });
  });

  it('reads the matrix by rows too, and null as no way', () => {
    const rows = readProblem(changed((p) => (p.matrix = [[0, null], [600, 0]]))); // prettier-ignore
    expect([...(rows.problem.matrix as Float64Array)]).toEqual([0, NO_WAY_SECONDS, 600, 0]);
  });

  it('passes over what it does not know, and takes null as left out', () => {
    const read = readProblem(
      changed((p) => {
        put(p, 'note', 'from elsewhere');
        put(p.jobs[0]!, 'part', null);
        put(p, 'previous', null);
      }),
    );
    expect(read.problem).not.toHaveProperty('note');
    expect(read.problem).not.toHaveProperty('previous');
    expect(read.problem.jobs[0]).not.toHaveProperty('part');
  });

  it('finds no part in a van that only the language has put there', () => {
    const read = readProblem(
      changed((p) => {
        put(p.jobs[0]!, 'part', 'constructor');
        p.technicians[0]!.frozen = [];
      }),
    );
    expect(plan(read.problem, { iterations: 0, seed: 1 }).unassigned).toMatchObject([
      { job: 'a', reason: 'part' },
    ]);
  });

  it.each<[unknown, string]>([
    [null, 'must be an object'],
    [[], 'must be an object'],
    [{}, 'version: must be a number; it is missing'],
  ])('refuses %j', (sent, words) => {
    expect(() => readProblem(sent)).toThrow(words);
  });

  it.each<[string, (problem: Whole) => unknown]>([
    ['version: must be 1', (p) => put(p, 'version', 2)],
    ['now: must be a number', (p) => put(p, 'now', 'today')],
    ['budgetMs: must be 0 or more, not -1', (p) => put(p, 'budgetMs', -1)],
    ['seed: must be a number', (p) => put(p, 'seed', 'x')],
    ['locations: must be a whole number of 0 or more, not 1.5', (p) => put(p, 'locations', 1.5)],
    ['matrix: must be a list; it is missing', (p) => put(p, 'matrix', undefined)],
    ['matrix: must hold 2 rows or 4 numbers, not 3', (p) => put(p, 'matrix', [0, 1, 2])],
    ['matrix: must hold 2 rows or 4 numbers, not 1', (p) => put(p, 'matrix', [[0, 1]])],
    ['matrix[1]: must hold 2 numbers, not 1', (p) => put(p, 'matrix', [[0, 1], [0]])],
    ['matrix[1]: must be a list', (p) => put(p, 'matrix', [[0, 1], 5])],
    ['matrix[2]: must be a number of seconds', (p) => put(p, 'matrix', [0, 1, -1, 0])],
    ['matrix[1][0]: must be a number of seconds', (p) => put(p, 'matrix', [[0, 1], ['x', 0]])], // prettier-ignore
    ['jobs: must be a list', (p) => put(p, 'jobs', {})],
    ['jobs[0]: must be an object', (p) => put(p, 'jobs', [null])],
    ['jobs[0].id: must be a text', (p) => put(p.jobs[0]!, 'id', 5)],
    ['jobs[0].id: must not be empty', (p) => put(p.jobs[0]!, 'id', '')],
    ['jobs[1].id: must differ from jobs[0].id', (p) => p.jobs.push(p.jobs[0]!)],
    ['jobs[0].loc: must be a place of the matrix, from 0 to 1, not 2', (p) => put(p.jobs[0]!, 'loc', 2)], // prettier-ignore
    ['jobs[0].service: must be 0 or more', (p) => put(p.jobs[0]!, 'service', -5)],
    ['jobs[0].serviceBy["t"]: must be a number', (p) => put(p.jobs[0]!.serviceBy, 't', null)],
    ['jobs[0].calledAt: must be a number; it is missing', (p) => put(p.jobs[0]!, 'calledAt', undefined)], // prettier-ignore
    ['jobs[0].earliest: must be a number', (p) => put(p.jobs[0]!, 'earliest', [])],
    ['jobs[0].weight: must be a number', (p) => put(p.jobs[0]!, 'weight', 'high')],
    ['jobs[0].skills[0]: must be a text', (p) => put(p.jobs[0]!, 'skills', [1])],
    ['jobs[0].part: must be a text', (p) => put(p.jobs[0]!, 'part', 3)],
    ['jobs[0].windows[0]: must hold two numbers', (p) => put(p.jobs[0]!, 'windows', [[1]])],
    ['jobs[0].windows[0][1]: must be a number', (p) => put(p.jobs[0]!, 'windows', [[1, 'x']])],
    ['jobs[0].windows[0]: must not end before it begins', (p) => put(p.jobs[0]!, 'windows', [[2, 1]])], // prettier-ignore
    ['jobs[0].deadlines[0].at: must be a number', (p) => put(p.jobs[0]!, 'deadlines', [{ value: 1 }])], // prettier-ignore
    ['jobs[0].deadlines[0].value: must be 0 or more', (p) => put(p.jobs[0]!, 'deadlines', [{ at: 1, value: -1 }])], // prettier-ignore
    ['jobs[0].onlyTechnicians: must be a list', (p) => put(p.jobs[0]!, 'onlyTechnicians', 't')],
    ['technicians: must be a list', (p) => put(p, 'technicians', undefined)],
    ['technicians[0].id: must be a text', (p) => put(p.technicians[0]!, 'id', undefined)],
    ['technicians[1].id: must differ', (p) => p.technicians.push({ ...p.technicians[0]!, frozen: [] })], // prettier-ignore
    ['technicians[0].home: must be a place', (p) => put(p.technicians[0]!, 'home', 9)],
    ['technicians[0].at: must be a whole number', (p) => put(p.technicians[0]!, 'at', -1)],
    ['technicians[0].availableAt: must be a number', (p) => put(p.technicians[0]!, 'availableAt', null)], // prettier-ignore
    ['technicians[0].skills: must be a list', (p) => put(p.technicians[0]!, 'skills', 'all')],
    ['technicians[0].parts["start-relay"]: must be a whole number', (p) => put(p.technicians[0]!.parts, 'start-relay', 0.5)], // prettier-ignore
    ['technicians[0].shifts[0].start: must be a number', (p) => put(p.technicians[0]!.shifts[0]!, 'start', '7')], // prettier-ignore
    ['technicians[0].shifts[0].end: must be a number', (p) => put(p.technicians[0]!.shifts[0]!, 'end', '19')], // prettier-ignore
    ['technicians[0].shifts[0].end: must not lie before the start', (p) => put(p.technicians[0]!.shifts[0]!, 'end', -1)], // prettier-ignore
    ['technicians[0].shifts[0].from: must be a place', (p) => put(p.technicians[0]!.shifts[0]!, 'from', 2)], // prettier-ignore
    ['technicians[0].shifts[0].to: must be a place', (p) => put(p.technicians[0]!.shifts[0]!, 'to', 2)], // prettier-ignore
    ['technicians[0].shifts[0].breaks[0].to: must not lie before `from`', (p) => put(p.technicians[0]!.shifts[0]!.breaks[0]!, 'to', 5)], // prettier-ignore
    ['technicians[0].shifts[0].breaks[0].seconds: must be a number', (p) => put(p.technicians[0]!.shifts[0]!.breaks[0]!, 'seconds', '60')], // prettier-ignore
    ['technicians[0].shifts: must hold a shift', (p) => put(p.technicians[0]!, 'shifts', [])],
    ['technicians[0].frozen[0]: must be the id of a job', (p) => put(p.technicians[0]!, 'frozen', ['x'])], // prettier-ignore
    ['technicians[0].frozen[1]: must not be accepted twice', (p) => put(p.technicians[0]!, 'frozen', ['a', 'a'])], // prettier-ignore
    ['shop.loc: must be a place', (p) => put(p.shop, 'loc', 7)],
    ['shop.seconds: must be a number', (p) => put(p.shop, 'seconds', undefined)],
    ['shop.parts: must be an object', (p) => put(p.shop, 'parts', [])],
    ['previous.routes: must be a list', (p) => put(p.previous, 'routes', {})],
    ['previous.routes[0].shift: must be a whole number', (p) => put(p.previous.routes[0]!, 'shift', -1)], // prettier-ignore
    ['previous.routes[0].technician: must be a text', (p) => put(p.previous.routes[0]!, 'technician', 1)], // prettier-ignore
    ['previous.routes[0].stops[0].start: must be a number', (p) => put(p.previous.routes[0]!.stops[0]!, 'start', '9')], // prettier-ignore
    ['previous.routes[0].stops[0].job: must be a text', (p) => put(p.previous.routes[0]!.stops[0]!, 'job', 9)], // prettier-ignore
    ['weights.travelPerHour: must be 0 or more', (p) => put(p.weights, 'travelPerHour', -40)],
    ['weights.churnMoved: must be a number', (p) => put(p.weights, 'churnMoved', 'much')],
  ])('refuses: %s', (words, change) => {
    expect(() => readProblem(changed(change))).toThrow(words);
  });
});
