import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { build, stop } from 'esbuild';
import { USUAL_FACTORS, type RoadConditions } from '@shared/domain/roads/conditions';
import { greatCircleKm, type LonLat } from '@shared/domain/travel/great-circle';
import { createRoadsWorker, RoadsClient } from '../../server/workers/roads-client';
import { madeGrid, wholeGrid } from '../support/made-roads';
import { roadsFolder, roadsInThisThread } from '../support/roads';

/** Doors in a made city, some metres beside its streets. */
const door = (x: number, y: number): LonLat => [-47.7 + x * 0.0012, 36.4 + y * 0.0009];
const DOORS = [door(1.3, 1.1), door(8.5, 2.05), door(4.1, 9.6), door(11, 11.2)];

const slow: RoadConditions = { roads: [], factors: { ...USUAL_FACTORS, storm: 0.5 } };
/** Water all round the corner of the city where the last door is. */
const flooded: RoadConditions = {
  roads: [
    {
      id: 'moat',
      kind: 'flooded',
      from: 0,
      until: null,
      shape: {
        type: 'area',
        ring: [
          door(9.4, 9.4),
          door(19.5, 9.4),
          door(19.5, 9.6),
          door(9.6, 9.6),
          door(9.6, 19.5),
          door(9.4, 19.5),
        ],
      },
    },
  ],
  factors: USUAL_FACTORS,
};

let folder: Awaited<ReturnType<typeof roadsFolder>>;
let bundle: string;
beforeAll(async () => {
  folder = await roadsFolder(wholeGrid(20));
  bundle = mkdtempSync(path.join(tmpdir(), 'thawline-roads-'));
  await build({
    absWorkingDir: path.resolve(__dirname, '../..'),
    entryPoints: ['server/workers/roads-worker.ts'],
    outdir: bundle,
    bundle: true,
    platform: 'node',
    format: 'cjs',
    target: 'node20',
    tsconfig: 'tsconfig.json',
    logLevel: 'error',
  });
  await stop();
});
afterAll(() => {
  folder.remove();
  rmSync(bundle, { recursive: true, force: true });
});

const opened = async (): Promise<RoadsClient> => {
  const roads = new RoadsClient(roadsInThisThread());
  await roads.switchTo({ folder: folder.path, name: 'Skerry County' });
  return roads;
};

describe('the roads of a region', () => {
  it('give the same drives as a table, one by one, from one to many and as lines', async () => {
    const roads = await opened();
    const { seconds, metres } = await roads.matrix(DOORS);
    const legs = await roads.path([DOORS[0]!, DOORS[1]!, DOORS[2]!]);
    expect([legs[0]!.seconds, legs[0]!.metres]).toEqual([seconds[1], metres[1]]);
    expect([legs[1]!.seconds, legs[1]!.metres]).toEqual([seconds[4 + 2], metres[4 + 2]]);
    const fan = await roads.oneToMany(DOORS[0]!, DOORS.slice(1));
    expect([...fan.there.seconds]).toEqual([...seconds.subarray(1, 4)]);
    expect([...fan.back.seconds]).toEqual([4, 8, 12].map((cell) => seconds[cell]));
    const travel = roads.travel(120);
    expect([...travel.matrix([DOORS[0]!, DOORS[3]!])]).toEqual([
      0,
      Math.ceil(seconds[3]!) + 120,
      Math.ceil(seconds[12]!) + 120,
      0,
    ]);
    expect(travel.distanceKm(DOORS[0]!, DOORS[3]!)).toBeCloseTo(metres[3]! / 1000, 9);
    expect(roads.source).toBe('Roads of Skerry County');
    expect(travel.source).toBe(roads.source);
  });

  it('draw a leg from the road beside its start to the road beside its end, as long as it says', async () => {
    const [leg] = await (await opened()).path([DOORS[0]!, DOORS[3]!]);
    const { line, metres } = leg!;
    expect(greatCircleKm(line[0]!, DOORS[0]!)).toBeLessThan(0.05);
    expect(greatCircleKm(line.at(-1)!, DOORS[3]!)).toBeLessThan(0.05);
    const drawn = line.slice(1).reduce((km, at, i) => km + greatCircleKm(line[i]!, at), 0);
    // The made blocks are 107 by 100 metres, by the map a little more or less.
    expect(drawn * 1000 * 0.98).toBeLessThan(metres);
    expect(drawn * 1000 * 1.02).toBeGreaterThan(metres);
  });

  it('count the way to the road from a place that is far from any', async () => {
    const roads = await opened();
    // 40 km south of the city's edge, and a second place a kilometre from there.
    const [far, farther] = [door(4, -400), door(4, -410)];
    const { seconds, metres } = await roads.matrix([far, door(4, 0), farther]);
    const km = greatCircleKm(far, door(4, 0));
    expect(metres[1]).toBeCloseTo((km * 1000 - 200) * 1.35, 0);
    expect(seconds[1]).toBeCloseTo(((km - 0.2) * 1.35 * 3600) / 40, 1);
    expect(metres[2]).toBeCloseTo(greatCircleKm(far, farther) * 1350, 0);
    expect([seconds[0], seconds[4]]).toEqual([0, 0]);
    const [leg] = await roads.path([far, door(4, 0)]);
    expect(leg!.seconds).toBe(seconds[1]);
    expect(roads.travel(0).matrix([far, door(4, 0)])[1]).toBe(Math.ceil(seconds[1]!));
    const fan = await roads.oneToMany(door(4, 0), [far]);
    expect([fan.back.seconds[0], fan.there.seconds[0]]).toEqual([seconds[1], seconds[3]]);
  });

  it('name the nearest road', async () => {
    const roads = await opened();
    const near = roads.nearest(door(3.5, 2.02))!;
    expect(near).toMatchObject({ roadClass: 'residential', isBridge: false, name: null });
    expect(near.metres).toBeCloseTo(2, 0);
    expect(near.line).toHaveLength(2);
  });

  it('follow conditions: no way is Infinity, and back again', async () => {
    const roads = await opened();
    const before = await roads.matrix(DOORS);
    await roads.follow(flooded);
    const during = await roads.matrix(DOORS);
    expect([3, 7, 11, 12, 13, 14].map((cell) => during.seconds[cell])).toEqual(
      Array<number>(6).fill(Infinity),
    );
    expect(during.seconds[1]).toBe(before.seconds[1]);
    expect((await roads.path([DOORS[0]!, DOORS[3]!]))[0]).toBeNull();
    expect(roads.travel(120).matrix([DOORS[0]!, DOORS[3]!])[1]).toBe(Infinity);
    expect(roads.travel(120).distanceKm(DOORS[0]!, DOORS[3]!)).toBe(Infinity);
    await roads.follow({ roads: [], factors: USUAL_FACTORS });
    expect(await roads.matrix(DOORS)).toEqual(before);
  });

  it('answer a question of its own conditions under those, and others as before', async () => {
    const roads = await opened();
    const usual = await roads.matrix(DOORS);
    const halved = await roads.matrix(DOORS, slow);
    expect(halved.seconds[1]! / usual.seconds[1]!).toBeCloseTo(2, 2);
    expect(await roads.matrix(DOORS)).toEqual(usual);
    expect(roads.followed.factors.storm).toBe(1);
  });

  it('answer from the times before until new ones are worked in; the latest wins', async () => {
    const roads = await opened();
    const first = roads.travel(0).matrix([DOORS[0]!, DOORS[1]!])[1]!;
    const following = [roads.follow(flooded), roads.follow(slow)];
    expect(roads.followed.factors.storm).toBe(1);
    expect(roads.travel(0).matrix([DOORS[0]!, DOORS[1]!])[1]).toBe(first);
    await Promise.all(following);
    expect(roads.followed).toBe(slow);
    expect(roads.travel(0).matrix([DOORS[0]!, DOORS[1]!])[1]).toBeGreaterThan(first * 1.9);
  });

  it('become those of another region, under the conditions that hold', async () => {
    const roads = await opened();
    await roads.follow(slow);
    const other = await roadsFolder(madeGrid(20));
    const before = await roads.matrix(DOORS);
    await roads.switchTo({ folder: other.path, name: 'Pell County' });
    other.remove();
    expect(roads.source).toBe('Roads of Pell County');
    expect(roads.followed).toBe(slow);
    expect((await roads.matrix(DOORS)).seconds).not.toEqual(before.seconds);
  });

  it('are straight lines where a region has none, and say so', async () => {
    const roads = await opened();
    await roads.switchTo({ folder: path.join(folder.path, 'nowhere'), name: 'Open Sea' });
    expect(roads.source).toMatch(/^Straight line/);
    const { seconds, metres } = await roads.matrix(DOORS);
    const km = greatCircleKm(DOORS[0]!, DOORS[1]!) * 1.35;
    expect(metres[1]).toBeCloseTo(km * 1000, 6);
    expect(seconds[1]).toBeCloseTo((km / 40) * 3600, 6);
    expect(roads.nearest(DOORS[0]!)).toBeNull();
    expect((await roads.path([DOORS[0]!, DOORS[1]!]))[0]?.line).toEqual(DOORS.slice(0, 2));
    expect(roads.travel(120).source).toMatch(/^Straight line/);
  });

  it('come from a thread of their own that shares the memory', async () => {
    const worker = createRoadsWorker(path.join(bundle, 'roads-worker.js'));
    try {
      const inThread = new RoadsClient(worker);
      await inThread.switchTo({ folder: folder.path, name: 'Skerry County' });
      const here = await opened();
      for (const conditions of [slow, flooded]) {
        await inThread.follow(conditions);
        await here.follow(conditions);
        expect(await inThread.matrix(DOORS)).toEqual(await here.matrix(DOORS));
        expect(inThread.travel(60).matrix(DOORS)).toEqual(here.travel(60).matrix(DOORS));
        expect(await inThread.path(DOORS)).toEqual(await here.path(DOORS));
      }
      const { seconds } = await inThread.matrix(DOORS);
      // Of another realm under the test runner, so its class is another one.
      expect(Object.prototype.toString.call(seconds.buffer)).toBe('[object SharedArrayBuffer]');
    } finally {
      await worker.close();
    }
  });
});
