import fc from 'fast-check';
import { SeededRandom } from '@shared/domain/planner/random';
import {
  buildRoads,
  type BuiltRoads,
  type Segment,
  type SegmentsAndTurns,
} from '@shared/domain/roads/build-graph';
import { USUAL_FACTORS } from '@shared/domain/roads/conditions';
import { driveTable, driveTableBack, Scratch } from '@shared/domain/roads/drive-table';
import { KeptDrives } from '@shared/domain/roads/kept-drives';
import { WayFinder, type TimedRoads } from '@shared/domain/roads/quickest-way';
import { NO_WAY, SEGMENT_FLAGS } from '@shared/domain/roads/road-graph';
import type { RoadPoint } from '@shared/domain/roads/road-ends';
import { madeGrid } from '../support/made-roads';
import { RoadOracle } from '../support/road-oracle';
import { timedRoads } from '../support/timed-roads';

/** Small maps with one-way streets, loops, twins, banned turns and paths, and roads for visits only. */
const maps = fc
  .record({
    junctions: fc.integer({ min: 2, max: 12 }),
    streets: fc.array(
      fc.record({
        from: fc.nat(11),
        to: fc.nat(11),
        alongMs: fc.oneof(fc.constant(0), fc.integer({ min: 1, max: 60 })),
        againstMs: fc.oneof(fc.constant(0), fc.integer({ min: 1, max: 60 })),
        isForVisits: fc.constantFrom(false, false, false, true),
      }),
      { minLength: 3, maxLength: 30 },
    ),
    bans: fc.array(fc.tuple(fc.nat(59), fc.nat(59)), { maxLength: 12 }),
    paths: fc.array(fc.array(fc.nat(59), { minLength: 3, maxLength: 5 }), { maxLength: 6 }),
  })
  .map(({ junctions, streets, bans, paths }): SegmentsAndTurns => {
    const segments = streets.map(({ isForVisits, ...street }, i): Segment => ({
      ...street,
      from: street.from % junctions,
      to: street.to % junctions,
      dm: 100 + i,
      roadClass: 6,
      flags: isForVisits ? SEGMENT_FLAGS.destination : 0,
      name: 0,
      lons: [0, 1000],
      lats: [0, 1000],
    }));
    const lanes = segments.length * 2;
    const endOf = (lane: number): number => segments[lane >> 1]![lane % 2 === 0 ? 'to' : 'from'];
    /** From numbers that mean nothing a path that hangs together. */
    const pathOf = (choices: readonly number[]): number[] =>
      choices.reduce<number[]>((path, choice) => {
        const last = path.at(-1);
        const onward = Array.from({ length: lanes }, (_, lane) => lane).filter(
          (lane) => last === undefined || endOf(lane ^ 1) === endOf(last),
        );
        return [...path, onward[choice % onward.length]!];
      }, []);
    const bannedPaths = [
      ...bans.map(([lane, next]) => [lane % lanes, next % lanes]),
      ...paths.map(pathOf),
    ];
    return { junctions, segments, bannedPaths };
  });

const shares = fc.constantFrom(0, 0.25, 0.5, 0.9, 1);
const conditions = fc.record({
  cuts: fc.array(fc.tuple(fc.nat(29), shares, shares), { maxLength: 5 }),
  slow: fc.array(fc.tuple(fc.nat(29), fc.constantFrom(1.5, 2, 4)), { maxLength: 4 }),
  storm: fc.constantFrom(1, 0.5, 0.7),
});

const finite = (ms: number): number => (ms >= NO_WAY ? Infinity : ms);

function pointsOf(roads: TimedRoads, count: number, seed = 1): RoadPoint[] {
  const random = new SeededRandom(seed);
  return Array.from({ length: count }, () => ({
    segment: random.below(roads.graph.segmentCount),
    share: [0, 0.3, 0.5, 0.8, 1][random.below(5)]!,
  }));
}

describe('drives along roads', () => {
  it('are those of Dijkstra on any small map, under any conditions', () => {
    let compared = 0;
    let unreachable = 0;
    fc.assert(
      fc.property(maps, conditions, (map, { cuts, slow, storm }) => {
        const built = buildRoads(map);
        const count = built.graph.segmentCount;
        if (count === 0) return;
        const cover = {
          cuts: new Map(
            cuts.map(([segment, a, b]) => [
              segment % count,
              [Math.min(a, b), Math.max(a, b)] as const,
            ]),
          ),
          slowness: new Map(slow.map(([segment, slower]) => [segment % count, slower])),
        };
        const roads = timedRoads(built, { ...USUAL_FACTORS, storm }, cover);
        const points = pointsOf(roads, 8);
        const oracle = new RoadOracle(map, built, roads.lanes);
        const expected = points.flatMap((point) => oracle.from(point, points));
        const scratch = new Scratch(roads.hierarchy);
        const table = driveTable(roads, points, points, scratch);
        expect(Array.from(table.ms, finite)).toEqual(expected);
        // Few rows are swept in another way.
        const few = driveTable(roads, points.slice(2, 4), points, scratch);
        expect(Array.from(few.ms)).toEqual(Array.from(table.ms.subarray(16, 32)));
        const fewBack = driveTableBack(roads, points.slice(2, 4), points, scratch);
        const back = driveTableBack(roads, points, points, scratch);
        const finder = new WayFinder(roads.hierarchy);
        const faults: string[] = [];
        points.forEach((from, row) =>
          points.forEach((to, column) => {
            const ms = expected[row * 8 + column]!;
            const way = finder.way(roads, from, to);
            if (column === 2 || column === 3)
              if (finite(fewBack.ms[(column - 2) * 8 + row]!) !== ms) faults.push('few rows back');
            const found = [
              finite(back.ms[column * 8 + row]!),
              way?.ms ?? Infinity,
              finite(finder.length(roads, from, to).ms),
            ];
            if (found.some((one) => one !== ms)) faults.push(`${found.join(' ')} for ${ms}`);
            if (way) faults.push(...faultsOf(map, built, roads, from, to, way));
            compared++;
            if (!way) unreachable++;
          }),
        );
        expect(faults).toEqual([]);
      }),
      { numRuns: 250, seed: 20261201 },
    );
    // Otherwise the maps would be too small, or too broken, to say anything.
    expect(compared).toBeGreaterThan(10_000);
    expect(unreachable).toBeGreaterThan(300);
    expect(unreachable).toBeLessThan(compared / 2);
  });

  it('lead from everywhere to everywhere while no road is closed', () => {
    let visits = 0;
    fc.assert(
      fc.property(maps, (map) => {
        const built = buildRoads(map);
        if (built.graph.segmentCount === 0) return;
        const roads = timedRoads(built);
        const points = pointsOf(roads, 6);
        const { ms } = driveTable(roads, points, points, new Scratch(roads.hierarchy));
        // A point may be reached from itself without a drive.
        expect(Math.max(...ms)).toBeLessThan(NO_WAY);
        const said = map.segments.flatMap(({ flags }, i) => (flags ? [i * 2, i * 2 + 1] : []));
        const isTold = map.segments.some((_, i) => built.isForVisits(i * 2));
        if (isTold) expect(said.every((lane) => built.isForVisits(lane))).toBe(true);
        visits += Array.from(built.kept).filter((raw) => built.isForVisits(raw * 2)).length;
      }),
      { numRuns: 400, seed: 20261202 },
    );
    expect(visits).toBeGreaterThan(300);
  });

  it('are those of Dijkstra on a made city', () => {
    const map = madeGrid(40);
    const built = buildRoads(map);
    const roads = timedRoads(built);
    const points = pointsOf(roads, 60);
    const oracle = new RoadOracle(map, built, roads.lanes);
    const table = driveTable(roads, points, points, new Scratch(roads.hierarchy));
    for (let row = 0; row < 6; row++)
      expect(Array.from(table.ms.subarray(row * 60, row * 60 + 60))).toEqual(
        oracle.from(points[row]!, points),
      );
  });
});

/** What is wrong with a way: it must be one that may be driven, and take as long as it says. */
function faultsOf(
  map: SegmentsAndTurns,
  { kept, isForVisits }: BuiltRoads,
  { graph, lanes }: TimedRoads,
  from: RoadPoint,
  to: RoadPoint,
  way: { readonly ms: number; readonly lanes: readonly number[] },
): string[] {
  if (way.lanes.length === 0)
    return from.segment === to.segment && from.share === to.share ? [] : ['no lanes'];
  const faults: string[] = [];
  const raw = way.lanes.map((lane) => kept[lane >> 1]! * 2 + (lane & 1));
  for (let i = 1; i < raw.length; i++) {
    const [before, next] = [raw[i - 1]!, raw[i]!];
    const end = map.segments[before >> 1]![before % 2 === 0 ? 'to' : 'from'];
    if (map.segments[next >> 1]![next % 2 === 0 ? 'from' : 'to'] !== end) faults.push('a jump');
    if (
      map.bannedPaths.some((path) => path.join() === raw.slice(i + 1 - path.length, i + 1).join())
    )
      faults.push('a banned path');
  }
  // Visits lie at the ends of a drive, never between two stretches of roads for everybody.
  const places = raw.map((lane) => (isForVisits(lane) ? 'v' : '-')).join('');
  if (!/^v*-*v*$/.test(places)) faults.push(`a way through: ${places}`);
  const [first, last] = [way.lanes[0]!, way.lanes.at(-1)!];
  if (first >> 1 !== from.segment || last >> 1 !== to.segment) faults.push('wrong ends');
  const upTo = (lane: number, { share }: RoadPoint): number =>
    Math.round(lanes.openMs[lane]! * (lane % 2 === 0 ? share : 1 - share));
  const whole = way.lanes.reduce((sum, lane) => sum + lanes.openMs[lane]!, 0);
  if (whole - upTo(first, from) - lanes.openMs[last]! + upTo(last, to) !== way.ms)
    faults.push('another time');
  if (way.lanes.some((lane) => graph.laneHead[lane]! < 0)) faults.push('against a one-way street');
  return faults;
}

describe('drives that are kept', () => {
  const built = buildRoads(madeGrid(20));
  const roads = timedRoads(built);
  const scratch = new Scratch(roads.hierarchy);

  it('are the same as those worked out afresh, whatever was asked before', () => {
    const kept = new KeptDrives(roads, scratch, 24);
    const random = new SeededRandom(7);
    const known = pointsOf(roads, 40, 9);
    for (let round = 0; round < 40; round++) {
      const points = Array.from({ length: 1 + random.below(30) }, () => known[random.below(40)]!);
      const fresh = driveTable(roads, points, points, scratch);
      const table = kept.table(points);
      expect(Array.from(table.ms)).toEqual(Array.from(fresh.ms));
      expect(Array.from(table.dm)).toEqual(Array.from(fresh.dm));
    }
  });

  it('are worked out once: of a known table only what is new', () => {
    const kept = new KeptDrives(roads, scratch, 24);
    const climbs = jest.spyOn(scratch.climb, 'from');
    const worked = (points: readonly RoadPoint[]): number => {
      climbs.mockClear();
      kept.table(points);
      return climbs.mock.calls.length;
    };
    const points = Array.from({ length: 13 }, (_, i) => ({ segment: i * 7, share: 0.5 }));
    expect(worked(points.slice(0, 12))).toBe(12);
    expect(worked(points.slice(0, 12))).toBe(0);
    // One that is new: from it to all, and from all to it.
    expect(worked(points)).toBe(2);
    expect(worked([...points].reverse())).toBe(0);
    climbs.mockRestore();
  });

  it('are handed out as they are: a later question does not change them', () => {
    const kept = new KeptDrives(roads, scratch, 24);
    const [a, b, c] = pointsOf(roads, 3, 4);
    const first = kept.table([a!, b!]);
    const before = Array.from(first.ms);
    kept.table([c!, a!, b!]).ms.fill(0);
    expect(Array.from(first.ms)).toEqual(before);
    expect(Array.from(kept.table([a!, b!]).ms)).toEqual(before);
  });
});
