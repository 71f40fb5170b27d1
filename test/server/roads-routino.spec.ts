import { existsSync, writeFileSync } from 'node:fs';
import { basename, join } from 'node:path';
import { buildRoads, type BuiltRoads } from '@shared/domain/roads/build-graph';
import { SeededRandom } from '@shared/domain/planner/random';
import { driveTable, Scratch } from '@shared/domain/roads/drive-table';
import { ROAD_CLASSES } from '@shared/domain/roads/road-class';
import type { RoadGraph } from '@shared/domain/roads/road-graph';
import type { RoadPoint } from '@shared/domain/roads/road-ends';
import { lineOf } from '@shared/domain/roads/storm-cover';
import { EARTH_RADIUS_KM, greatCircleKm, type LonLat } from '@shared/domain/travel/great-circle';
import { readExtract } from '../../server/region/osm-extract';
import { roadNetwork } from '../../server/region/road-network';
import { demoCountyPbf } from '../support/demo-county';
import { temporaryFolder } from '../support/region-files';
import { hasRoutino, Routino } from '../support/routino';
import { timedRoads } from '../support/timed-roads';

const PAIRS = 50;
/** Shorter drives are mostly the rounding of what is printed. */
const LEAST_MINUTES = 4;

const data = process.env['THAWLINE_TEST_DATA'] ?? '';
const real = ['queens-village', 'harrisburg']
  .map((name) => join(data, 'osm', `${name}.osm.pbf`))
  .filter((path) => data !== '' && existsSync(path));

const routino = hasRoutino()
  ? describe
  : // It is not installed by the tests; Debian has it as the package routino.
    describe.skip;

/**
 * The same extracts and the same speeds in a router that shares nothing with this one. What is left:
 * it counts each piece between two nodes in whole metres, tenths of a second and km/h, rounded down, which
 * is done to our times here as well; it forbids turning round on the road;
 * it drives through gates whatever their access; and it closes roads with `access=destination`, which are
 * open to a visit.
 */
routino('drives beside those of routino (needs routino-router)', () => {
  const folders: ReturnType<typeof temporaryFolder>[] = [];
  afterAll(() => folders.forEach((folder) => folder.remove()));
  const folder = (): string => {
    const made = temporaryFolder();
    folders.push(made);
    return made.path;
  };

  it('agree on the demo county', async () => {
    const path = join(folder(), 'county.osm.pbf');
    writeFileSync(path, demoCountyPbf());
    await compare(path, folder());
  });

  for (const path of real) it(`agree on ${basename(path)}`, () => compare(path, folder()));

  if (real.length === 0)
    it.skip('agree on real extracts: set THAWLINE_TEST_DATA to the folder that holds them', () => {});
});

async function compare(pbf: string, folder: string): Promise<void> {
  const extract = await readExtract(pbf);
  const built = buildRoads(roadNetwork(extract));
  const roads = timedRoads({ ...built, graph: truncated(built) });
  const ends = twoWayEnds(roads.graph);
  const random = new SeededRandom(11);
  const pick = (): RoadPoint => ({ segment: ends[random.below(ends.length)]!, share: 0 });
  const from = Array.from({ length: PAIRS * 5 }, pick);
  const to = Array.from({ length: PAIRS * 5 }, pick);
  const table = driveTable(roads, from, to, new Scratch(roads.hierarchy));
  const other = await Routino.of(pbf, folder);
  const differences: number[] = [];
  let missing = 0;
  for (let i = 0; i < from.length && differences.length < PAIRS; i++) {
    const ours = table.ms[i * to.length + i]! / 60_000;
    if (ours < LEAST_MINUTES) continue;
    const start = lineOf(roads.graph, from[i]!.segment)[0]!;
    const end = lineOf(roads.graph, to[i]!.segment)[0]!;
    const theirs = await other.minutes(start, end);
    if (theirs === null) missing++;
    else differences.push(((ours - theirs) / theirs) * 100);
  }
  const sorted = [...differences].sort((a, b) => a - b);
  const sizes = differences.map(Math.abs).sort((a, b) => a - b);
  const median = sorted[sorted.length >> 1]!;
  const p95 = sizes[Math.floor(sizes.length * 0.95)]!;
  const most = sizes.at(-1)!;
  if (process.env['THAWLINE_TEST_LOG'])
    process.stderr.write(
      `${JSON.stringify({ pbf, pairs: sizes.length, missing, median, p95, most })}\n`,
    );
  expect(sizes.length).toBeGreaterThanOrEqual(30);
  // A node that only roads with `access=destination` lead to.
  expect(missing).toBeLessThanOrEqual(PAIRS * 0.1);
  expect(Math.abs(median)).toBeLessThan(0.5);
  expect(p95).toBeLessThan(2);
  expect(most).toBeLessThan(6);
}

/** Segments that may be driven both ways: from their ends a drive may begin in any direction. */
const twoWayEnds = (graph: RoadGraph): number[] =>
  Array.from({ length: graph.segmentCount }, (_, i) => i).filter(
    (i) =>
      graph.laneHead[i * 2]! >= 0 &&
      graph.laneHead[i * 2 + 1]! >= 0 &&
      ROAD_CLASSES[graph.segmentClass[i]!] !== 'ferry',
  );

/**
 * Its sphere has the equator's radius: of 3,201 pieces that it printed, 96 % have the length in whole metres
 * that this gives, rounded down, and 92 % that of the mean radius.
 */
const THEIR_EARTH = 6378.137 / EARTH_RADIUS_KM;

/**
 * Lane times as the sum of pieces in whole metres and whole tenths of a second, at whole km/h, all rounded
 * down: 30 mph are 48 km/h to it.
 */
function truncated({ graph }: BuiltRoads): RoadGraph {
  const laneMs = graph.laneMs.map((ms, lane) => {
    const line: LonLat[] = lineOf(graph, lane >> 1);
    const kmh = (graph.segmentDm[lane >> 1]! * 360) / Math.max(1, ms);
    // Our own times are whole milliseconds, so 40 km/h may come back as 39.99.
    const metresPerTenth = Math.floor(kmh + 0.1) / 36;
    let tenths = 0;
    for (let i = 1; i < line.length; i++) {
      const metres = Math.trunc(greatCircleKm(line[i - 1]!, line[i]!) * 1000 * THEIR_EARTH);
      tenths += Math.trunc(metres / metresPerTenth);
    }
    return tenths * 100;
  });
  return { ...graph, laneMs };
}
