import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { SeededRandom } from '@shared/domain/planner/random';
import { buildRoads, type SegmentsAndTurns } from '@shared/domain/roads/build-graph';
import { USUAL_FACTORS, type RoadConditions } from '@shared/domain/roads/conditions';
import { withWaysDown } from '@shared/domain/roads/hierarchy';
import { emptyTimes, workIn } from '@shared/domain/roads/hierarchy-times';
import { laneTimes } from '@shared/domain/roads/lane-times';
import type { RoadGraph } from '@shared/domain/roads/road-graph';
import { lineOf, NO_COVER } from '@shared/domain/roads/storm-cover';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { writeCounty } from '../../server/region/county/write-county';
import { readExtract } from '../../server/region/osm-extract';
import { readRoadFile, writeRoads } from '../../server/region/road-file';
import { roadNetwork } from '../../server/region/road-network';
import { RoadsEngine } from '../../server/workers/roads-engine';
import { madeGrid } from '../support/made-roads';

/** 307 × 307 junctions, of which 94,000 are joined. */
const SIDE = 307;
const CALLS = 1000;
const TECHNICIANS = 60;

/**
 * The roads of the demo county and of a made city of 94,000 junctions: making the graph, working conditions
 * in, tables, one call against a storm, lines. Everything in this thread, so one core; medians after a
 * first round that warms up, by the clock and by the processor's own count, which a busy machine does not
 * lengthen as much.
 */
async function main(): Promise<void> {
  const county = roadNetwork(await readExtract(writeCounty({ seed: 1 })));
  const result = {
    county: await measure(county, county.names),
    made: await measure(madeGrid(SIDE), ['']),
  };
  process.stdout.write(JSON.stringify(result));
}

async function measure(map: SegmentsAndTurns, names: readonly string[]): Promise<object> {
  const folder = mkdtempSync(path.join(tmpdir(), 'thawline-bench-roads-'));
  try {
    const [built, buildMs] = timed(() => buildRoads(map));
    const bytes = await writeRoads(folder, built, names);
    const file = (await readRoadFile(folder))!;
    const [engine, openMs] = timed(() => new RoadsEngine(file));
    const [, indexMs] = timed(() => engine.snap);
    const { graph } = engine.roads;
    let share = 0.5;
    const other = (): RoadConditions => ({
      roads: [],
      factors: { ...USUAL_FACTORS, storm: (share += 0.01) },
    });
    const conditions = other();
    const reweighMs = median(5, () => engine.times(other()));
    engine.times(conditions);

    const random = new SeededRandom(1);
    const points = (count: number): LonLat[] =>
      Array.from({ length: count }, () => pointBeside(graph, random));
    const table = (count: number): Milliseconds =>
      medianOf(
        5,
        () => points(count),
        (own) => engine.matrix(own, conditions),
      );
    const storm = points(CALLS + TECHNICIANS);
    engine.matrix(storm, conditions);
    return {
      nodes: graph.nodeCount,
      arcs: graph.arcTail.length,
      hierarchyArcs: built.stored.upHead.length,
      fileBytes: bytes,
      buildMs,
      openMs,
      indexMs,
      reweighMs,
      onlyWorkInMs: median(3, workInAfresh(engine)),
      table500Ms: table(500),
      table1000Ms: table(1000),
      // With the whole storm known, a re-plan after one more call.
      replanOneNewMs: medianOf(
        5,
        () => points(1),
        (own) => engine.matrix([...storm, ...own], conditions),
      ),
      oneAgainst1060Ms: medianOf(
        9,
        () => points(1)[0]!,
        (own) => engine.fan(own, storm, conditions),
      ),
      pathMs: medianOf(
        101,
        () => points(2),
        (own) => engine.path(own, conditions),
      ),
      singleDriveMs: singleDrive(engine, conditions, points),
      dijkstraOneToAllMs: median(5, () => dijkstra(graph, random.below(graph.nodeCount))),
    };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Commands ask for single drives in the server's own thread. */
function singleDrive(
  engine: RoadsEngine,
  conditions: RoadConditions,
  points: (count: number) => LonLat[],
): Milliseconds {
  const roads = engine.withTimes(engine.times(conditions));
  return medianOf(
    101,
    () => points(2),
    ([from, to]) => engine.drive(roads, from!, to!),
  );
}

function workInAfresh(engine: RoadsEngine): () => void {
  const { graph, stored } = engine.roads;
  const hierarchy = withWaysDown(stored);
  const { laneMs } = laneTimes(graph, USUAL_FACTORS, NO_COVER);
  const times = emptyTimes(stored.upHead.length);
  return () => workIn(hierarchy, graph, laneMs, times);
}

function pointBeside(graph: RoadGraph, random: SeededRandom): LonLat {
  const [lon, lat] = lineOf(graph, random.below(graph.segmentCount))[0]!;
  return [lon + (random.unit() - 0.5) * 5e-4, lat + (random.unit() - 0.5) * 5e-4];
}

/** What a table of drives would be made of without a hierarchy: all drives from one node. */
function dijkstra(graph: RoadGraph, from: number): Float64Array {
  const { nodeCount, arcTail, arcHead, arcLane, laneMs } = graph;
  const first = new Int32Array(nodeCount + 1);
  for (const tail of arcTail) first[tail + 1]!++;
  for (let v = 0; v < nodeCount; v++) first[v + 1]! += first[v]!;
  const best = new Float64Array(nodeCount).fill(Infinity);
  best[from] = 0;
  const keys = [0];
  const nodes = [from];
  while (nodes.length > 0) {
    const key = keys[0]!;
    const v = nodes[0]!;
    takeFirst(keys, nodes);
    if (key > best[v]!) continue;
    // Arcs are sorted by their tails.
    for (let arc = first[v]!; arc < first[v + 1]!; arc++) {
      const reached = key + laneMs[arcLane[arc]!]!;
      const head = arcHead[arc]!;
      if (reached >= best[head]!) continue;
      best[head] = reached;
      put(keys, nodes, reached, head);
    }
  }
  return best;
}

function put(keys: number[], nodes: number[], key: number, node: number): void {
  let at = keys.push(key) - 1;
  nodes.push(node);
  while (at > 0) {
    const parent = (at - 1) >> 1;
    if (keys[parent]! <= key) break;
    keys[at] = keys[parent]!;
    nodes[at] = nodes[parent]!;
    at = parent;
  }
  keys[at] = key;
  nodes[at] = node;
}

function takeFirst(keys: number[], nodes: number[]): void {
  const key = keys.pop()!;
  const node = nodes.pop()!;
  if (keys.length === 0) return;
  let at = 0;
  for (let child = 1; child < keys.length; child = at * 2 + 1) {
    if (child + 1 < keys.length && keys[child + 1]! < keys[child]!) child++;
    if (keys[child]! >= key) break;
    keys[at] = keys[child]!;
    nodes[at] = nodes[child]!;
    at = child;
  }
  keys[at] = key;
  nodes[at] = node;
}

interface Milliseconds {
  readonly clock: number;
  readonly cpu: number;
}

function timed<T>(work: () => T): [result: T, took: Milliseconds] {
  const before = process.cpuUsage();
  const began = performance.now();
  const result = work();
  const clock = performance.now() - began;
  const { user, system } = process.cpuUsage(before);
  return [result, { clock: hundredths(clock), cpu: hundredths((user + system) / 1000) }];
}

const median = (rounds: number, work: () => unknown): Milliseconds =>
  medianOf(rounds, () => null, work);

/** What the work is given is made outside the measured time. */
function medianOf<T>(rounds: number, make: () => T, work: (made: T) => unknown): Milliseconds {
  const took: Milliseconds[] = [];
  for (let round = 0; round <= rounds; round++) {
    const made = make();
    const [, ms] = timed(() => work(made));
    if (round > 0) took.push(ms);
  }
  const middle = (figures: number[]): number => figures.sort((a, b) => a - b)[figures.length >> 1]!;
  return {
    clock: middle(took.map(({ clock }) => clock)),
    cpu: middle(took.map(({ cpu }) => cpu)),
  };
}

const hundredths = (ms: number): number => Math.round(ms * 100) / 100;

void main();
