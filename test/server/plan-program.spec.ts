import { spawn, type ChildProcessWithoutNullStreams } from 'node:child_process';
import { once } from 'node:events';
import path from 'node:path';
import { checkPlan } from '@shared/domain/planner/check-plan';
import type { Plan, PlanProblem } from '@shared/domain/planner/problem';
import { readLines } from '../../server/plan-program/read-lines';
import { randomProblem } from '../support/random-problem';

/** Starting a program takes its time on a busy machine. */
jest.setTimeout(60_000);

const DOOR = path.resolve(__dirname, '../../server/setup/plan.mjs');

interface WrittenPlan extends Pick<Plan, 'routes' | 'unassigned' | 'cost'> {
  readonly iters: number;
  readonly elapsedMs: number;
}

const start = (...args: string[]): ChildProcessWithoutNullStreams =>
  spawn(process.execPath, [DOOR, ...args]);

async function collect(stream: AsyncIterable<Buffer>): Promise<string> {
  const pieces: Buffer[] = [];
  for await (const piece of stream) pieces.push(piece);
  return Buffer.concat(pieces).toString('utf8');
}

async function run(input: string, ...args: string[]) {
  const program = start(...args);
  program.stdin.end(input);
  const [out, err, [code]] = await Promise.all([
    collect(program.stdout),
    collect(program.stderr),
    once(program, 'exit') as Promise<[number | null]>,
  ]);
  return { out, err, code };
}

const problem = (seed: number): PlanProblem =>
  randomProblem({ seed, jobs: 25, technicians: 3, shifts: 2, frozenShare: 0.5 });
/** As a program would send it: the matrix flat, or by rows. */
function sent(posed: PlanProblem, byRows = false): string {
  const flat = Array.from(posed.matrix as ArrayLike<number>);
  const row = (from: number) => flat.slice(from * posed.locations, (from + 1) * posed.locations);
  const matrix = byRows ? Array.from({ length: posed.locations }, (_, from) => row(from)) : flat;
  return JSON.stringify({ ...posed, matrix });
}
const plans = (out: string): WrittenPlan[] =>
  out
    .trimEnd()
    .split('\n')
    .map((line) => JSON.parse(line) as WrittenPlan);
const stops = ({ routes }: WrittenPlan): string[] =>
  routes.flatMap((route) => route.stops.map(({ job }) => job));

// One run first: it builds what the others then find.
beforeAll(() => run('', '--help'), 120_000);

describe('npm run plan', () => {
  it('answers one problem with one line in the written format, by rows or flat', async () => {
    const posed = problem(1);
    const pretty = JSON.stringify(JSON.parse(sent(posed, true)), null, 1);
    const args = ['--iterations', '200', '--seed', '4'];
    const [flat, rows] = await Promise.all([run(sent(posed), ...args), run(pretty, ...args)]);
    expect([flat.code, rows.code, flat.err, rows.err]).toEqual([0, 0, '', '']);
    const [plan, ...more] = plans(flat.out);
    expect(more).toEqual([]);
    expect({ ...plans(rows.out)[0], elapsedMs: 0 }).toEqual({ ...plan, elapsedMs: 0 });
    expect(Object.keys(plan!)).toEqual(['routes', 'unassigned', 'cost', 'iters', 'elapsedMs']);
    expect(Object.keys(plan!.routes[0]!)).toEqual(['technician', 'shift', 'stops', 'end']);
    expect(Object.keys(plan!.routes[0]!.stops[0]!)).toEqual(['job', 'arrive', 'start', 'finish']);
    expect(plan!.iters).toBe(200);
    const check = checkPlan(posed, plan!);
    expect(check.violations).toEqual([]);
    expect(check.cost).toBeCloseTo(plan!.cost, 2);
  });

  it('explains stops and calls left out when asked', async () => {
    const crowded = { ...problem(2), technicians: problem(2).technicians.slice(0, 1) };
    const jobs = crowded.jobs.map((job, index) =>
      index % 5 === 0 ? { ...job, skills: ['unheard-of'] } : job,
    );
    const asked = sent({ ...crowded, jobs });
    const { out, code } = await run(asked, '--explain', '--iterations', '50');
    expect(code).toBe(0);
    const [plan] = plans(out);
    for (const route of plan!.routes)
      for (const stop of route.stops) expect(stop).toHaveProperty('because', expect.any(String));
    expect(plan!.unassigned.length).toBeGreaterThan(4);
    for (const left of plan!.unassigned) {
      expect(['skill', 'part', 'no_shift', 'capacity']).toContain(left.reason);
      expect(left).toHaveProperty('wouldChange', expect.any(Array));
    }
    expect(out).toContain('one more technician with unheard-of');
    expect(out).toMatch(/unheard-of for tech-0: tech-0 would begin at \d+/);
  });

  it('answers a stream line by line, the bad lines with their trouble, and goes on', async () => {
    const bad = JSON.stringify({
      ...(JSON.parse(sent(problem(3))) as object),
      technicians: [{ id: 't', frozen: [], shifts: [{ start: 0, end: 'x' }] }],
    });
    const lines = ['\uFEFF' + sent(problem(1)), '', bad, '{"version":', `${sent(problem(2))}\r`];
    const { out, code, err } = await run(lines.join('\n'), '--stream', '--iterations', '20');
    expect(code).toBe(2);
    expect(err).toBe('');
    const [first, troubled, garbled, last, ...more] = out.trimEnd().split('\n');
    expect(more).toEqual([]);
    expect(stops(plans(first!)[0]!)).not.toEqual([]);
    expect(JSON.parse(troubled!)).toEqual({
      error: 'technicians[0].shifts[0].end: must be a number',
      line: 3,
    });
    expect(JSON.parse(garbled!)).toEqual({ error: expect.stringMatching(/^not JSON: /), line: 4 });
    expect(checkPlan(problem(2), plans(last!)[0]!).violations).toEqual([]);
  });

  it('gives each plan before the next problem comes, and ends in order when nobody reads on', async () => {
    const program = start('--stream', '--iterations', '10');
    const ended = once(program, 'exit') as Promise<[number | null]>;
    for (const seed of [5, 6]) {
      program.stdin.write(`${sent(problem(seed))}\n`);
      const [answer] = (await once(program.stdout, 'data')) as [Buffer];
      expect(plans(answer.toString())[0]!.iters).toBe(10);
    }
    const err = collect(program.stderr);
    program.stdout.destroy();
    program.stdin.on('error', () => undefined);
    program.stdin.end(`${sent(problem(7))}\n`.repeat(20));
    expect((await ended)[0]).toBe(0);
    expect(await err).toBe('');
  });

  it('refuses in one line what it cannot plan, with exit code 2, and unknown options with 64', async () => {
    const refused = await Promise.all([
      run(''),
      run('{'),
      run('[]'),
      run(JSON.stringify({ version: 1, locations: 0, matrix: [], now: 0 })),
      run('{}', '--seconds', 'soon'),
    ]);
    expect(refused.map(({ code }) => code)).toEqual([2, 2, 2, 2, 64]);
    const words = [
      'no problem came in',
      'not JSON: ',
      'must be an object',
      'jobs: must be a list',
      '--seconds',
    ];
    refused.forEach(({ out, err }, index) => {
      expect(out).toBe('');
      expect(err).toContain(words[index]);
      expect(err.trimEnd().split('\n')).toHaveLength(1);
    });
  });
});

describe('readLines', () => {
  const lines = async (pieces: readonly string[], most?: number) => {
    const found: unknown[] = [];
    const input = (async function* () {
      for (const piece of pieces) yield Promise.resolve(Buffer.from(piece));
    })();
    for await (const { number, text } of readLines(input, most)) found.push([number, text]);
    return found;
  };

  it('joins pieces, keeps the last line without a newline, and skips no empty one', async () => {
    expect(await lines(['a', 'b\n\nc', 'd\n', 'e'])).toEqual([
      [1, 'ab'],
      [2, ''],
      [3, 'cd'],
      [4, 'e'],
    ]);
  });

  it('gives up a line that is too long and goes on with the next', async () => {
    expect(await lines(['abc', 'def', 'g\nok\n'], 5)).toEqual([
      [1, null],
      [2, 'ok'],
    ]);
  });
});
