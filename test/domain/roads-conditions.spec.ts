import { buildRoads } from '@shared/domain/roads/build-graph';
import {
  conditionsAt,
  conditionsKey,
  USUAL_FACTORS,
  type StormRoad,
} from '@shared/domain/roads/conditions';
import { driveTable, Scratch } from '@shared/domain/roads/drive-table';
import { laneTimes } from '@shared/domain/roads/lane-times';
import { lineOfWay } from '@shared/domain/roads/line-of-way';
import { WayFinder } from '@shared/domain/roads/quickest-way';
import { ROAD_CLASSES } from '@shared/domain/roads/road-class';
import { NO_WAY } from '@shared/domain/roads/road-graph';
import type { RoadPoint } from '@shared/domain/roads/road-ends';
import { lineOf, NO_COVER, stormCover } from '@shared/domain/roads/storm-cover';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { wholeGrid } from '../support/made-roads';
import { timedRoads } from '../support/timed-roads';

/** Six by six junctions, every street there and open both ways; blocks of about 107 by 100 metres. */
const built = buildRoads(wholeGrid(6));
const { graph } = built;
const at = (x: number, y: number): LonLat => [-47.7 + x * 0.0012, 36.4 + y * 0.0009];

function street(x: number, y: number, toX: number, toY: number): number {
  const wanted = JSON.stringify([at(x, y), at(toX, toY)].map(rounded));
  for (let segment = 0; segment < graph.segmentCount; segment++)
    if (JSON.stringify(lineOf(graph, segment).map(rounded)) === wanted) return segment;
  throw new Error(`no street ${x} ${y}`);
}
const rounded = ([lon, lat]: LonLat): string => `${lon.toFixed(6)} ${lat.toFixed(6)}`;

const stormRoad = (shape: StormRoad['shape'], told: Partial<StormRoad> = {}): StormRoad => ({
  id: 'a',
  kind: 'closed',
  from: 0,
  until: null,
  shape,
  ...told,
});
const line = (...points: LonLat[]): StormRoad['shape'] => ({ type: 'line', points });
const box = (west: number, south: number, east: number, north: number): StormRoad['shape'] => ({
  type: 'area',
  ring: [at(west, south), at(east, south), at(east, north), at(west, north)],
});

describe('storm roads on the graph', () => {
  it('a line along a street takes that street and no side street', () => {
    const { cuts } = stormCover(graph, [stormRoad(line(at(1, 2), at(3, 2)))]);
    expect([...cuts.keys()].sort()).toEqual([street(1, 2, 2, 2), street(2, 2, 3, 2)].sort());
    for (const [from, to] of cuts.values()) expect([from, to]).toEqual([0, 1]);
  });

  it('a line that ends half-way leaves the rest of the street open', () => {
    const { cuts } = stormCover(graph, [stormRoad(line(at(1, 2), at(1.5, 2)))]);
    expect([...cuts.keys()]).toEqual([street(1, 2, 2, 2)]);
    const [from, to] = cuts.get(street(1, 2, 2, 2))!;
    expect(from).toBe(0);
    expect(to).toBeGreaterThan(0.4);
    expect(to).toBeLessThan(0.7);
  });

  it.each([0.5, 0.06])('a stroke across a street at %f of it closes it just there', (share) => {
    const { cuts } = stormCover(graph, [stormRoad(line(at(1 + share, 1.9), at(1 + share, 2.1)))]);
    expect([...cuts.keys()]).toEqual([street(1, 2, 2, 2)]);
    const [from, to] = cuts.get(street(1, 2, 2, 2))!;
    expect(from).toBeLessThanOrEqual(share);
    expect(to).toBeGreaterThanOrEqual(share);
    // Two pieces of 18 m when it lies where they meet.
    expect(to - from).toBeLessThan(0.35);
  });

  it('an area takes the stretches inside it', () => {
    const { cuts } = stormCover(graph, [stormRoad(box(1.4, 1.5, 2.6, 2.5), { kind: 'flooded' })]);
    expect([...cuts.keys()].sort()).toEqual(
      [street(1, 2, 2, 2), street(2, 2, 3, 2), street(2, 1, 2, 2), street(2, 2, 2, 3)].sort(),
    );
    const [from, to] = cuts.get(street(1, 2, 2, 2))!;
    expect(from).toBeGreaterThan(0.2);
    expect(to).toBe(1);
  });

  it('a small area between two points of a street is seen too', () => {
    const { cuts } = stormCover(graph, [
      stormRoad(box(1.49, 1.97, 1.51, 2.03), { kind: 'flooded' }),
    ]);
    expect([...cuts.keys()]).toEqual([street(1, 2, 2, 2)]);
  });

  it('slow areas slow the share that lies in them, and do not add up', () => {
    const half = stormRoad(box(1.5, 1.9, 2.1, 2.1), { kind: 'slow', speedShare: 0.5 });
    const slower = stormRoad(box(0.9, 1.9, 2.1, 2.1), { kind: 'slow', speedShare: 0.25 });
    const one = street(1, 2, 2, 2);
    expect(stormCover(graph, [half]).slowness.get(one)).toBeCloseTo(1.5, 1);
    expect(stormCover(graph, [half, slower]).slowness.get(one)).toBeCloseTo(4, 5);
    expect(stormCover(graph, [slower, half]).cuts.size).toBe(0);
  });
});

describe('drives under conditions', () => {
  const drive = (cover = NO_COVER, factors = USUAL_FACTORS) => {
    const roads = timedRoads(built, factors, cover);
    const finder = new WayFinder(roads.hierarchy);
    return (from: RoadPoint, to: RoadPoint) => finder.length(roads, from, to).ms;
  };
  const closed = stormCover(graph, [stormRoad(line(at(2.5, 1.9), at(2.5, 2.1)))]);
  const blocked = street(2, 2, 3, 2);
  const before: RoadPoint = { segment: blocked, share: 0.1 };
  const inside: RoadPoint = { segment: blocked, share: 0.5 };
  const behind: RoadPoint = { segment: blocked, share: 0.9 };
  const home: RoadPoint = { segment: street(0, 0, 1, 0), share: 0.5 };

  it('reach a door before a closure and one behind it, each from its side', () => {
    const [usual, now] = [drive(), drive(closed)];
    expect(now(home, before)).toBe(usual(home, before));
    expect(now(home, behind)).toBeLessThan(NO_WAY);
    // Along the street it is a few metres; round the block it is four streets.
    expect(now(before, behind)).toBeGreaterThan(3 * usual(before, behind));
    expect(now(behind, before)).toBeLessThan(NO_WAY);
  });

  it('reach nothing inside a closure, and leave nothing there', () => {
    const now = drive(closed);
    expect([now(home, inside), now(inside, home), now(inside, before)]).toEqual([
      NO_WAY,
      NO_WAY,
      NO_WAY,
    ]);
    expect(now(inside, inside)).toBe(0);
  });

  it('find no way to a part that is cut off all round, and every way inside it', () => {
    const moat = stormCover(graph, [
      stormRoad(box(3.4, 3.4, 3.6, 5.2), { kind: 'flooded' }),
      stormRoad(box(3.4, 3.4, 5.2, 3.6), { kind: 'flooded' }),
    ]);
    const now = drive(moat);
    const island: RoadPoint = { segment: street(4, 4, 5, 4), share: 0.5 };
    const neighbour: RoadPoint = { segment: street(4, 5, 5, 5), share: 0.5 };
    expect(now(home, island)).toBe(NO_WAY);
    expect(now(island, home)).toBe(NO_WAY);
    expect(now(island, neighbour)).toBe(drive()(island, neighbour));
  });

  it('take longer by exactly the factors, and ferries do not', () => {
    const usual = drive()(home, behind);
    const slow = drive(NO_COVER, { timeOfDay: 0.5, storm: 0.5, byClass: {} })(home, behind);
    expect(slow / usual).toBeCloseTo(4, 2);
    const byClass = laneTimes(graph, { ...USUAL_FACTORS, byClass: { residential: 0.8 } }, NO_COVER);
    const plain = laneTimes(graph, USUAL_FACTORS, NO_COVER);
    graph.segmentClass.forEach((roadClass, segment) => {
      const ratio = byClass.laneMs[segment * 2]! / plain.laneMs[segment * 2]!;
      expect(ratio).toBeCloseTo(ROAD_CLASSES[roadClass] === 'residential' ? 1.25 : 1, 3);
    });
    const ferries = { ...graph, segmentClass: graph.segmentClass.map(() => 8) };
    expect(laneTimes(ferries, { timeOfDay: 0.5, storm: 1, byClass: {} }, NO_COVER).laneMs).toEqual(
      plain.laneMs,
    );
    const resting = laneTimes(ferries, { ...USUAL_FACTORS, ferriesRun: false }, NO_COVER);
    expect(resting.laneMs.every((ms) => ms === NO_WAY)).toBe(true);
  });

  it('stop at fords when those cannot be passed', () => {
    const forded = {
      ...graph,
      segmentFlags: graph.segmentFlags.map((_, i) => (i === blocked ? 2 : 0)),
    };
    const { laneMs, cuts } = laneTimes(
      forded,
      { ...USUAL_FACTORS, fordsPassable: false },
      NO_COVER,
    );
    expect([...cuts.keys()]).toEqual([blocked]);
    expect([laneMs[blocked * 2], laneMs[blocked * 2 + 1]]).toEqual([NO_WAY, NO_WAY]);
    expect(laneTimes(forded, USUAL_FACTORS, NO_COVER).cuts.size).toBe(0);
  });

  it('refuse a share of speed that is none', () => {
    expect(() => laneTimes(graph, { ...USUAL_FACTORS, storm: 0 }, NO_COVER)).toThrow('share of 0');
  });
});

describe('the line of a drive', () => {
  it('runs from point to point, cut at both ends, without a jump', () => {
    const roads = timedRoads(built);
    const from: RoadPoint = { segment: street(0, 0, 1, 0), share: 0.25 };
    const to: RoadPoint = { segment: street(4, 4, 4, 5), share: 0.5 };
    const way = new WayFinder(roads.hierarchy).way(roads, from, to)!;
    const drawn = lineOfWay(graph, way.lanes, from, to);
    expect(rounded(drawn[0]!)).toBe(rounded(at(0.25, 0)));
    expect(rounded(drawn.at(-1)!)).toBe(rounded(at(4, 4.5)));
    for (let i = 1; i < drawn.length; i++) {
      const [dx, dy] = [drawn[i]![0] - drawn[i - 1]![0], drawn[i]![1] - drawn[i - 1]![1]];
      expect(Math.abs(dx) / 0.0012 + Math.abs(dy) / 0.0009).toBeLessThan(1.001);
    }
    const table = driveTable(roads, [from], [to], new Scratch(roads.hierarchy));
    expect([table.ms[0], table.dm[0]]).toEqual([way.ms, way.dm]);
  });

  it('of no drive at all is the place itself', () => {
    const point: RoadPoint = { segment: street(0, 0, 1, 0), share: 0.5 };
    const drawn = lineOfWay(graph, [], point, point);
    expect(drawn.map(rounded)).toEqual([rounded(at(0.5, 0)), rounded(at(0.5, 0))]);
  });
});

describe('conditions', () => {
  const one = stormRoad(line(at(0, 0), at(1, 0)), { from: 100, until: 200 });
  const other = stormRoad(box(0, 0, 1, 1), { id: 'b', kind: 'slow', speedShare: 0.5 });

  it('hold from the first moment of their span to the last but one', () => {
    const holds = (moment: number): string[] =>
      conditionsAt([one, other], USUAL_FACTORS, moment).roads.map(({ id }) => id);
    expect([99, 100, 199, 200].map(holds)).toEqual([['b'], ['a', 'b'], ['a', 'b'], ['b']]);
  });

  it('have the same name in any order and for any ids, and another for another time', () => {
    const key = conditionsKey({ roads: [one, other], factors: USUAL_FACTORS });
    expect(
      conditionsKey({
        roads: [other, { ...one, id: 'c', until: null, kind: 'flooded' }, one],
        factors: { ...USUAL_FACTORS, byClass: { primary: 1 } },
      }),
    ).toBe(key);
    for (const changed of [
      { roads: [one], factors: USUAL_FACTORS },
      { roads: [one, { ...other, speedShare: 0.4 }], factors: USUAL_FACTORS },
      { roads: [one, other], factors: { ...USUAL_FACTORS, storm: 0.9 } },
      { roads: [one, other], factors: { ...USUAL_FACTORS, byClass: { primary: 0.9 } } },
      { roads: [one, other], factors: { ...USUAL_FACTORS, fordsPassable: false } },
    ])
      expect(conditionsKey(changed)).not.toBe(key);
  });
});
