import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { booleanPointInPolygon, kinks, polygon } from '@turf/turf';
import { build, stop } from 'esbuild';
import { plan } from '@shared/domain/planner/plan';
import { checkPlan } from '@shared/domain/planner/check-plan';
import { SeededRandom } from '@shared/domain/planner/random';
import type { PocketCall } from '@shared/domain/pockets/pocket-summary';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { travelMatrix } from '@shared/domain/travel/travel-times';
import { pocketOutline } from '../../server/workers/pocket-outline';
import {
  createPlannerWorker,
  type PlannerRequest,
  type PlannerWorker,
} from '../../server/workers/planner-client';
import { createPocketsWorker, type PocketsWorker } from '../../server/workers/pockets-client';
import { WorkerClient, type WorkerClientOptions } from '../../server/workers/worker-client';

/** Longer than any test may last. */
const ENDLESS_MS = 600_000;

const root = path.resolve(__dirname, '../..');
const folder = mkdtempSync(path.join(tmpdir(), 'thawline-workers-'));

beforeAll(async () => {
  // Answers numbers by their square; words make it misbehave.
  writeFileSync(
    path.join(folder, 'toy.ts'),
    `import { serveRequests } from '${root}/server/workers/serve-requests';
     serveRequests((request, { shouldStop }) => {
       if (request === 'die') process.exit(3);
       if (request === 'throw') throw new RangeError('not today');
       if (request === 'deaf') for (;;);
       if (request === 'polite') { while (!shouldStop()); return 'stopped'; }
       return request * request;
     });`,
  );
  await build({
    absWorkingDir: root,
    entryPoints: [
      path.join(folder, 'toy.ts'),
      'server/workers/planner-worker.ts',
      'server/workers/pockets-worker.ts',
    ],
    entryNames: '[name]',
    outdir: folder,
    bundle: true,
    platform: 'node',
    format: 'cjs',
    target: 'node20',
    tsconfig: 'tsconfig.json',
    logLevel: 'error',
  });
  await stop();
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

const open: { close(): Promise<void> }[] = [];
afterEach(() => Promise.all(open.splice(0).map((client) => client.close())));

const opened = <T extends { close(): Promise<void> }>(client: T): T => {
  open.push(client);
  return client;
};

describe('WorkerClient', () => {
  type Toy = WorkerClient<number | string, number | string>;
  const toy = (options: Partial<WorkerClientOptions> = {}): Toy =>
    opened(
      new WorkerClient<number | string, number | string>({
        scriptPath: path.join(folder, 'toy.js'),
        name: 'toy',
        timeoutMs: 10_000,
        queue: 'in-order',
        graceMs: 200,
        ...options,
      }),
    );

  it('answers requests in their order, one at a time', async () => {
    const client = toy();
    expect(await Promise.all([2, 3, 4].map((one) => client.run(one)))).toEqual([4, 9, 16]);
  });

  it('runs only the latest of those that wait when told so, and says so to the others', async () => {
    const client = toy({ queue: 'latest-wins' });
    const answers = await Promise.allSettled([2, 3, 4, 5].map((one) => client.run(one)));
    expect(
      answers.map((one) => (one.status === 'fulfilled' ? one.value : one.reason.failure)),
    ).toEqual([4, 'superseded', 'superseded', 25]);
  });

  it('says what a request did wrong and goes on with the next', async () => {
    const client = toy();
    await expect(client.run('throw')).rejects.toMatchObject({
      failure: 'refused',
      message: expect.stringContaining('not today'),
    });
    await expect(client.run((() => 1) as unknown as number)).rejects.toMatchObject({
      failure: 'refused',
    });
    expect(await client.run(3)).toBe(9);
  });

  it('fails the request on which the thread dies, starts again and answers those that waited', async () => {
    const crashes: string[] = [];
    const client = toy({ onCrash: (error) => crashes.push(error.message) });
    expect(await client.run(2)).toBe(4);
    const dying = client.run('die');
    const after = client.run(5);
    await expect(dying).rejects.toMatchObject({ failure: 'crashed' });
    expect(await after).toBe(25);
    expect(crashes).toEqual(['ended with code 3']);
  });

  it('fails each request, and does not start for ever, when the script is missing', async () => {
    let crashes = 0;
    const client = toy({ scriptPath: path.join(folder, 'nowhere.js'), onCrash: () => crashes++ });
    await expect(client.run(1)).rejects.toMatchObject({ failure: 'crashed' });
    await expect(client.run(1)).rejects.toMatchObject({ failure: 'crashed' });
    expect(crashes).toBe(2);
  });

  it('gives up after the timeout and ends a thread that does not listen', async () => {
    const client = toy();
    await expect(client.run('deaf', { timeoutMs: 300 })).rejects.toMatchObject({
      failure: 'timeout',
    });
    expect(await client.run(6)).toBe(36);
  });

  it('cancels what runs and what waits, and keeps a thread that stops when told', async () => {
    const crashes: Error[] = [];
    const client = toy({ graceMs: 5000, onCrash: (error) => crashes.push(error) });
    const running = new AbortController();
    const waiting = new AbortController();
    const first = client.run('polite', { signal: running.signal });
    const second = client.run(7, { signal: waiting.signal });
    const third = client.run(8);
    setTimeout(() => waiting.abort(), 50);
    setTimeout(() => running.abort(), 150);
    await expect(second).rejects.toMatchObject({ failure: 'cancelled' });
    await expect(first).rejects.toMatchObject({ failure: 'cancelled' });
    expect(await third).toBe(64);
    expect(crashes).toEqual([]);
    await expect(client.run(1, { signal: AbortSignal.abort() })).rejects.toMatchObject({
      failure: 'cancelled',
    });
  });

  it('fails what is open when it closes, and everything after', async () => {
    const client = toy();
    const running = client.run('polite');
    const waiting = client.run(2);
    const settled = Promise.allSettled([running, waiting]);
    await client.close();
    expect((await settled).map((one) => one.status)).toEqual(['rejected', 'rejected']);
    await expect(client.run(2)).rejects.toMatchObject({ failure: 'closed' });
  });
});

function stormMorning(calls: number, technicians: number): PlannerRequest {
  const random = new SeededRandom(11);
  const now = 1_790_000_000;
  const points = Array.from({ length: calls + technicians }, (): LonLat => [
    -38 + random.unit() / 3,
    31 + random.unit() / 3,
  ]);
  return {
    points,
    seed: 1,
    problem: {
      version: 1,
      now,
      jobs: Array.from({ length: calls }, (_, index) => ({
        id: `call-${index}`,
        loc: index,
        service: 2700,
        calledAt: now - random.below(20_000),
        weight: 2,
        skills: [],
        deadlines: [{ at: now + random.below(30_000), value: 100 + random.below(400) }],
      })),
      technicians: Array.from({ length: technicians }, (_, index) => ({
        id: `tech-${index}`,
        home: calls + index,
        at: calls + index,
        availableAt: now,
        skills: [],
        parts: {},
        shifts: [{ start: now, end: now + 8 * 3600 }],
        frozen: [],
      })),
    },
  };
}

describe('the planner worker', () => {
  const planner = (options: Partial<WorkerClientOptions> = {}): PlannerWorker =>
    opened(createPlannerWorker(path.join(folder, 'planner-worker.js'), options));

  it('gives the same plan as the planner in this thread, with its summary and reasons', async () => {
    const request = stormMorning(40, 4);
    const problem = {
      ...request.problem,
      locations: request.points.length,
      matrix: travelMatrix(request.points),
    };
    const answer = await planner().run({ ...request, iterations: 300 });
    expect(answer.plan).toEqual(plan(problem, { iterations: 300, seed: 1 }));
    expect(checkPlan(problem, answer.plan).violations).toEqual([]);
    const stops = answer.plan.routes.flatMap((route) => route.stops);
    expect(answer.summary.stopCount).toBe(stops.length);
    expect(answer.summary.driveMiles).toBeGreaterThan(0);
    expect(answer.reasons.map(({ job }) => job).sort()).toEqual(stops.map(({ job }) => job).sort());
    expect(answer.before).toBeNull();
  });

  it('compares with the plan in force as it would go from now on', async () => {
    const request = stormMorning(40, 4);
    const client = planner();
    const first = await client.run({ ...request, iterations: 0 });
    const again = await client.run({
      ...request,
      problem: { ...request.problem, previous: first.plan },
      iterations: 500,
    });
    expect(again.before?.plan.routes).toEqual(first.plan.routes);
    expect(again.plan.cost).toBeLessThanOrEqual(again.before!.plan.cost);
  });

  it('uses its budget of time, ends by it, and leaves the event loop free', async () => {
    const client = planner();
    await client.run({ ...stormMorning(20, 2), iterations: 10 });
    let turns = 0;
    const turning = setInterval(() => (turns += 1), 1);
    // No rounds are given: without the budget this search would not end.
    const answer = await client.run({ ...stormMorning(200, 12), budgetMs: 600 });
    clearInterval(turning);
    expect(answer.plan.iterations).toBeGreaterThan(0);
    expect(answer.elapsedMs).toBeGreaterThanOrEqual(600);
    // Planning on this thread would leave it no turn in between.
    expect(turns).toBeGreaterThan(2);
  });

  it('stops by itself when nobody waits any more, and answers the next', async () => {
    // Neither its budget nor being ended by force may be what makes room for the next.
    const client = planner({ graceMs: ENDLESS_MS });
    await client.run({ ...stormMorning(20, 2), iterations: 10 });
    const nobody = new AbortController();
    const endless = client.run(
      { ...stormMorning(200, 12), budgetMs: ENDLESS_MS },
      { signal: nobody.signal, timeoutMs: ENDLESS_MS },
    );
    setTimeout(() => nobody.abort(), 100);
    await expect(endless).rejects.toMatchObject({ failure: 'cancelled' });
    const next = await client.run({ ...stormMorning(20, 2), iterations: 10 });
    expect(next.plan.iterations).toBe(10);
  });

  it('refuses a problem that contradicts itself and a plan without any budget', async () => {
    const client = planner();
    const request = stormMorning(5, 1);
    await expect(client.run({ ...request, points: [], iterations: 1 })).rejects.toMatchObject({
      failure: 'refused',
    });
    await expect(client.run(request)).rejects.toThrow('needs a budget');
  });
});

describe('the pockets worker', () => {
  const worker = (): PocketsWorker =>
    opened(createPocketsWorker(path.join(folder, 'pockets-worker.js')));
  const storm = (count: number): PocketCall[] => {
    const random = new SeededRandom(count);
    const clumps = Array.from({ length: 30 }, () => [random.unit() / 3, random.unit() / 3]);
    return Array.from({ length: count }, (_, index) => {
      const [x, y] = clumps[random.below(clumps.length)]!;
      return {
        id: `call-${index}`,
        at: [-38 + x! + random.unit() / 60, 31 + y! + random.unit() / 60],
        valueAtRiskCents: random.below(60_000),
        nextSaveByAt: 1_790_000_000_000 + random.below(40_000_000),
      };
    });
  };

  it('outlines 3,000 calls in pockets, each outline around all of its calls', async () => {
    const calls = storm(3000);
    const client = worker();
    const options = { epsKm: 0.8, minPoints: 4 };
    const { pockets } = await client.run({ calls, options });
    expect(pockets.length).toBeGreaterThan(3);
    for (const pocket of pockets) {
      const members = calls.filter(({ id }) => pocket.members.includes(id));
      expect(members).toHaveLength(pocket.count);
      for (const { at } of members) {
        expect(booleanPointInPolygon([...at], pocket.outline)).toBe(true);
      }
    }
    const moved = calls.slice(1);
    const next = await client.run({ calls: moved, options: { ...options, previous: pockets } });
    expect(next.pockets.map(({ key }) => key).sort()).toEqual(pockets.map(({ key }) => key).sort());
  });

  it('answers an empty picture', async () => {
    const answer = await worker().run({ calls: [], options: { epsKm: 0.8, minPoints: 4 } });
    expect(answer.pockets).toEqual([]);
  });
});

describe('pocketOutline', () => {
  it.each<[string, LonLat[]]>([
    ['one door', Array.from({ length: 4 }, (): LonLat => [-38, 31])],
    [
      'two doors',
      [
        [-38, 31],
        [-38, 31],
        [-37.99, 31],
        [-37.99, 31],
      ],
    ],
    ['doors in a line', [0, 1, 2, 3].map((step): LonLat => [-38 + step / 200, 31 + step / 400])],
    [
      'doors along a street to the north',
      [0, 1, 2, 3].map((step): LonLat => [-38, 31 + step / 300]),
    ],
    [
      'a triangle',
      [
        [-38, 31],
        [-37.99, 31],
        [-38, 31.01],
      ],
    ],
  ])('draws one simple outline around %s', (_, places) => {
    const outline = pocketOutline(places);
    for (const place of places) expect(booleanPointInPolygon([...place], outline)).toBe(true);
    expect(kinks(polygon(outline.coordinates)).features).toEqual([]);
    expect(outline.coordinates).toHaveLength(1);
    expect(outline.coordinates[0]!.length).toBeLessThan(40);
  });
});
