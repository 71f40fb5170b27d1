import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { buildRoads, type BuiltRoads, type Segment } from '@shared/domain/roads/build-graph';
import { SeededRandom } from '@shared/domain/planner/random';
import { driveTable, Scratch } from '@shared/domain/roads/drive-table';
import { ROAD_CLASSES } from '@shared/domain/roads/road-class';
import { SEGMENT_FLAGS } from '@shared/domain/roads/road-graph';
import { lineOf } from '@shared/domain/roads/storm-cover';
import { greatCircleKm, type LonLat } from '@shared/domain/travel/great-circle';
import type { Tags } from '../../server/region/osm-model';
import { readExtract } from '../../server/region/osm-extract';
import { roadNetwork, type RoadNetwork } from '../../server/region/road-network';
import { RoadSnap } from '../../server/region/road-snap';
import { durationMinutes, roadWayOf, speedKmh } from '../../server/region/road-tags';
import { readRoadFile, roadsIn, writeRoads } from '../../server/region/road-file';
import { demoCountyPbf } from '../support/demo-county';
import { extractOf, placeOn, type Sketch } from '../support/osm-sketch';
import { temporaryFolder } from '../support/region-files';
import { RoadOracle } from '../support/road-oracle';
import { timedRoads } from '../support/timed-roads';

const way = (tags: Tags) => roadWayOf({ highway: 'residential', ...tags });

describe('what a way is to a van', () => {
  it.each([
    ['50', 50],
    ['30 mph', 48.28],
    ['30mph', 48.28],
    ['5 knots', 9.26],
    ['50;30', 30],
    ['none', null],
    ['signals', null],
    ['0', null],
    [undefined, null],
  ])('reads a posted speed of %s', (text, kmh) => {
    const read = speedKmh(text);
    if (kmh === null) expect(read).toBeNull();
    else expect(read).toBeCloseTo(kmh, 2);
  });

  it.each([
    ['20', 20],
    ['00:20', 20],
    ['1:05:30', 65.5],
    ['PT1H5M', 65],
    ['PT30S', 0.5],
    ['PT', null],
    ['soon', null],
    ['0', null],
  ])('reads a duration of %s', (text, minutes) => expect(durationMinutes(text)).toBe(minutes));

  it('takes the lower of what is posted and what its class allows', () => {
    expect(way({ maxspeed: '20' })?.alongKmh).toBe(20);
    expect(way({ maxspeed: '120' })?.alongKmh).toBe(40);
    expect(way({ 'maxspeed:backward': '10' })).toMatchObject({ alongKmh: 40, againstKmh: 10 });
  });

  it.each<[Tags, boolean, boolean]>([
    [{}, true, true],
    [{ oneway: 'yes' }, true, false],
    [{ oneway: '-1' }, false, true],
    [{ oneway: 'no', highway: 'motorway' }, true, true],
    [{ highway: 'motorway' }, true, false],
    [{ highway: 'motorway_link' }, true, true],
    [{ junction: 'roundabout' }, true, false],
    [{ oneway: 'yes', 'oneway:motor_vehicle': 'no' }, true, true],
  ])('goes the ways that %j allows', (tags, along, against) => {
    const road = way(tags)!;
    expect([road.alongKmh > 0, road.againstKmh > 0]).toEqual([along, against]);
  });

  it.each<[Tags, boolean]>([
    [{ access: 'private' }, false],
    [{ access: 'no', motor_vehicle: 'yes' }, true],
    [{ motor_vehicle: 'no' }, false],
    [{ motor_vehicle: 'no', motorcar: 'yes' }, true],
    [{ access: 'destination' }, true],
    [{ vehicle: 'agricultural' }, false],
    [{ highway: 'footway' }, false],
    [{ highway: 'track' }, false],
    [{ highway: 'track', motor_vehicle: 'yes' }, true],
    [{ highway: 'residential', area: 'yes' }, false],
    [{ oneway: 'reversible' }, false],
    [{ highway: 'service', service: 'emergency_access' }, false],
  ])('with %j is open: %s', (tags, isOpen) => expect(way(tags) !== null).toBe(isOpen));
});

const ROAD = { highway: 'residential' };

async function built(sketch: Sketch): Promise<{ network: RoadNetwork; roads: BuiltRoads }> {
  const network = roadNetwork(await extractOf(sketch));
  return { network, roads: buildRoads(network) };
}

/** Minutes between two nodes of a sketch, to a tenth; Infinity where no way leads. */
function driver({ roads }: { roads: BuiltRoads }, paper: readonly string[]) {
  const timed = timedRoads(roads);
  const snap = new RoadSnap(roads.graph);
  return (from: string, to: string): number => {
    const points = [from, to].map((letter) => snap.nearest(placeOn(paper, letter)));
    const { ms } = driveTable(timed, [points[0]!], [points[1]!], new Scratch(timed.hierarchy));
    return ms[0]! >= 0x3fff_ffff ? Infinity : Math.round(ms[0]! / 100) / 10;
  };
}

describe('the network of an extract', () => {
  it('joins pieces that meet nobody, and keeps every point of the line', async () => {
    const paper = ['A.B.C.D', '....E..'];
    const { network } = await built({
      paper,
      ways: [
        { through: 'AB', tags: ROAD },
        { through: 'DCB', tags: ROAD },
        { through: 'CE', tags: ROAD },
      ],
    });
    const lines = network.segments.map((segment) => segment.lons.length).sort();
    // A-B-C is one, D-C and C-E are the others.
    expect(lines).toEqual([2, 2, 3]);
    for (const segment of network.segments) {
      const metres = lengthOf(segment);
      expect(segment.dm / 10).toBeCloseTo(metres, 0);
      expect(segment.alongMs).toBeCloseTo((metres * 3600) / 40, -1);
      expect(segment.againstMs).toBe(segment.alongMs);
    }
  });

  it('keeps roads of another class, name or kind apart', async () => {
    const { network } = await built({
      paper: ['A.B.C.D.E'],
      ways: [
        { through: 'AB', tags: { ...ROAD, name: 'Heron St' } },
        { through: 'BC', tags: { ...ROAD, name: 'Heron St', bridge: 'yes' } },
        { through: 'CD', tags: { ...ROAD, name: 'Larch Ave' } },
        { through: 'DE', tags: { highway: 'primary', name: 'Larch Ave' } },
      ],
    });
    expect(
      network.segments.map(({ name, flags, roadClass }) => [
        network.names[name],
        flags,
        ROAD_CLASSES[roadClass],
      ]),
    ).toEqual([
      ['Heron St', 0, 'residential'],
      ['Heron St', SEGMENT_FLAGS.bridge, 'residential'],
      ['Larch Ave', 0, 'residential'],
      ['Larch Ave', 0, 'primary'],
    ]);
  });

  it('goes round where a one-way street, a bollard or a banned turn says so', async () => {
    const paper = ['A.B.C', '.....', 'D.E.F'];
    const ring = [
      { through: 'ABC', tags: ROAD },
      { through: 'CF', tags: ROAD },
      { through: 'FED', tags: ROAD },
      { through: 'DA', tags: ROAD },
      { through: 'BE', tags: ROAD },
    ];
    const direct = driver(await built({ paper, ways: ring }), paper)('B', 'E');
    const withOneWay = ring.map((one, i) =>
      i === 4 ? { ...one, tags: { ...ROAD, oneway: '-1' } } : one,
    );
    const oneWay = driver(await built({ paper, ways: withOneWay }), paper);
    expect(oneWay('B', 'E')).toBeGreaterThan(2.5 * direct);
    expect(oneWay('E', 'B')).toBe(direct);

    const middle = ['A.B.C', '..X..', 'D.E.F'];
    const withBollard = ring.map((one, i) => (i === 4 ? { ...one, through: 'BXE' } : one));
    const bollard = driver(
      await built({ paper: middle, ways: withBollard, nodeTags: { X: { barrier: 'bollard' } } }),
      middle,
    );
    expect(bollard('B', 'E')).toBeGreaterThan(2.5 * direct);
    const gate = driver(
      await built({ paper: middle, ways: withBollard, nodeTags: { X: { barrier: 'gate' } } }),
      middle,
    );
    expect(gate('B', 'E')).toBeCloseTo(direct, 0);
  });

  it.each<[string, string, number]>([
    ['no_right_turn', 'W-B-S', 4],
    ['only_straight_on', 'W-B-S', 4],
    ['no_left_turn', 'W-B-S', 1],
  ])('obeys %s', async (restriction, _, least) => {
    // From W along the street to B, where turning towards S is the shortest way.
    const paper = ['W.B.C', '.....', 'S.Q.F'];
    const ways = [
      { through: 'WB', tags: { ...ROAD, oneway: 'yes' } },
      { through: 'BC', tags: ROAD },
      { through: 'BQ', tags: ROAD },
      { through: 'CF', tags: ROAD },
      { through: 'FQ', tags: ROAD },
      { through: 'QS', tags: ROAD },
      { through: 'SW', tags: ROAD },
    ];
    const toWay = restriction === 'only_straight_on' ? 2 : restriction === 'no_right_turn' ? 3 : 2;
    const { network, roads } = await built({
      paper,
      ways,
      relations: [
        {
          members: ['from:1', 'via:B', `to:${String(toWay)}`],
          tags: { type: 'restriction', restriction },
        },
      ],
    });
    expect(network.turnRules).toBe(1);
    const free = driver(await built({ paper, ways }), paper);
    const bound = driver({ roads }, paper);
    // Going on to C, F and Q is three blocks where turning is one.
    expect(bound('W', 'Q') / free('W', 'Q')).toBeCloseTo(least === 4 ? 2 : 1, 0);
  });

  it('obeys restrictions that lead over a way, and only for those who come that way', async () => {
    // A dual carriageway: from W eastwards, over the link BQ, and back westwards to S.
    const paper = ['W.B.C', '.....', 'S.Q.F'];
    const ways = [
      { through: 'WB', tags: { ...ROAD, oneway: 'yes' } },
      { through: 'BC', tags: { ...ROAD, oneway: 'yes' } },
      { through: 'BQ', tags: ROAD },
      { through: 'CF', tags: ROAD },
      { through: 'FQ', tags: { ...ROAD, oneway: 'yes' } },
      { through: 'QS', tags: ROAD },
      { through: 'SW', tags: ROAD },
    ];
    const ruled = (restriction: string, to: number) =>
      built({
        paper,
        ways,
        relations: [
          {
            members: ['from:1', 'via:3', `to:${String(to)}`],
            tags: { type: 'restriction', restriction },
          },
        ],
      });
    const free = driver(await built({ paper, ways }), paper);
    const noTurn = await ruled('no_u_turn', 6);
    expect([noTurn.network.turnRules, noTurn.network.turnRulesLeftOut]).toEqual([1, 0]);
    const bound = driver(noTurn, paper);
    expect(bound('W', 'S')).toBeGreaterThan(free('W', 'S'));
    expect(bound('W', 'Q')).toBe(free('W', 'Q'));
    expect(bound('C', 'S')).toBe(free('C', 'S'));

    const only = await ruled('only_straight_on', 6);
    expect(only.network.turnRules).toBe(1);
    // Who comes from W has to go over the link and on to S, and back from there to C.
    expect(driver(only, paper)('W', 'C')).toBeGreaterThan(2 * free('W', 'C'));
    expect(driver(only, paper)('W', 'S')).toBe(free('W', 'S'));
  });

  it('takes nobody through roads for visits, and everybody there and away', async () => {
    const paper = ['A.P.B.R.C', '....X....', 'D.S.E.T.F'];
    const drive = async (tags: Tags) => {
      const ways = [
        { through: 'APBRC', tags: ROAD },
        { through: 'CF', tags: ROAD },
        { through: 'FTESD', tags: ROAD },
        { through: 'DA', tags: ROAD },
        { through: 'BXE', tags: { ...ROAD, ...tags } },
      ];
      return driver(await built({ paper, ways }), paper);
    };
    const free = await drive({});
    const visits = await drive({ access: 'destination' });
    expect(visits('P', 'T')).toBeGreaterThan(1.3 * free('P', 'T'));
    expect(visits('P', 'X')).toBe(free('P', 'X'));
    expect(visits('X', 'T')).toBe(free('X', 'T'));
  });

  it('says how many restrictions it leaves out, and skips those that do not concern a van', async () => {
    const ways = [
      { through: 'AB', tags: ROAD },
      { through: 'BC', tags: ROAD },
    ];
    const rule = (members: string[], tags: Tags = {}) => ({
      members,
      tags: { type: 'restriction', restriction: 'no_left_turn', ...tags },
    });
    const { network } = await built({
      paper: ['A.B.C'],
      ways,
      relations: [
        rule(['from:1', 'via:2', 'to:1']),
        rule(['from:1', 'via:B', 'to:9']),
        rule(['from:1', 'via:B', 'to:2'], { except: 'motorcar' }),
      ],
    });
    expect([network.turnRules, network.turnRulesLeftOut]).toEqual([0, 2]);
  });

  it('knows ferries with their time, and fords', async () => {
    const paper = ['A.B.C.D', '.......', '.......'];
    const { network } = await built({
      paper,
      ways: [
        { through: 'AB', tags: { route: 'ferry', duration: '00:12' } },
        { through: 'BC', tags: { ...ROAD, ford: 'yes' } },
        { through: 'CD', tags: ROAD },
      ],
    });
    const [ferry, ford, road] = network.segments;
    expect([ferry!.alongMs, ROAD_CLASSES[ferry!.roadClass]]).toEqual([12 * 60_000, 'ferry']);
    expect([ford!.flags, road!.flags]).toEqual([SEGMENT_FLAGS.ford, 0]);
  });

  it('leaves out what cannot be reached and left again', async () => {
    const { network, roads } = await built({
      paper: ['A.B.C.D', '.......', 'X.Y....'],
      ways: [
        { through: 'AB', tags: ROAD },
        { through: 'BC', tags: { highway: 'tertiary' } },
        { through: 'CD', tags: { ...ROAD, oneway: 'yes' } },
        { through: 'XY', tags: ROAD },
      ],
    });
    expect(network.segments.length).toBe(4);
    expect(roads.leftOut).toBe(2);
    // Whoever lives there is taken to the nearest road that is left.
    const snapped = new RoadSnap(roads.graph).nearest(placeOn(['A.B.C.D'], 'D'));
    expect(snapped.metres).toBeGreaterThan(100);
  });
});

describe('the file of roads', () => {
  const folder = temporaryFolder();
  afterAll(() => folder.remove());

  it('gives back what was written, and refuses what is damaged', async () => {
    const { network, roads } = await built({
      paper: ['A.B', '...', 'C.D'],
      ways: [
        { through: 'ABDCA', tags: { ...ROAD, name: 'Kelp Loop é' } },
        { through: 'AD', tags: ROAD },
      ],
    });
    const bytes = await writeRoads(folder.path, roads, network.names);
    const file = (await readRoadFile(folder.path))!;
    expect(file.byteLength).toBe(bytes);
    const read = roadsIn(file);
    expect(read.names).toEqual(['', 'Kelp Loop é']);
    expect(read.graph).toEqual(roads.graph);
    expect(read.stored).toEqual(roads.stored);
    expect(await readRoadFile(join(folder.path, 'nowhere'))).toBeNull();
    expect(() => roadsIn(file.slice(0, 200))).toThrow('damaged');
    expect(() => roadsIn(new ArrayBuffer(64))).toThrow('damaged');
  });
});

const data = process.env['THAWLINE_TEST_DATA'] ?? '';
const extracts: readonly { name: string; pbf: () => string | Uint8Array }[] = [
  { name: 'the demo county', pbf: demoCountyPbf },
  ...['queens-village', 'harrisburg']
    .map((name) => ({ name, path: join(data, 'osm', `${name}.osm.pbf`) }))
    .filter(({ path }) => data !== '' && existsSync(path))
    .map(({ name, path }) => ({ name, pbf: () => path })),
];

describe('roads of whole regions', () => {
  for (const { name, pbf } of extracts) {
    it(`are driven as Dijkstra drives them: ${name}`, async () => {
      const network = roadNetwork(await readExtract(pbf()));
      const roads = buildRoads(network);
      const timed = timedRoads(roads);
      const random = new SeededRandom(3);
      const points = Array.from({ length: 60 }, () => ({
        segment: random.below(roads.graph.segmentCount),
        share: random.unit(),
      }));
      const table = driveTable(timed, points, points, new Scratch(timed.hierarchy));
      const oracle = new RoadOracle(network, roads, timed.lanes);
      for (let row = 0; row < 5; row++)
        expect(Array.from(table.ms.subarray(row * 60, row * 60 + 60))).toEqual(
          oracle.from(points[row]!, points),
        );
      // Points taken to the nearest road are taken to the nearest of all.
      const snap = new RoadSnap(roads.graph);
      for (let i = 0; i < 20; i++) {
        const [lon, lat] = lineOf(roads.graph, points[i]!.segment)[0]!;
        const at: LonLat = [lon + (random.unit() - 0.5) / 300, lat + (random.unit() - 0.5) / 300];
        const { metres } = snap.nearest(at);
        expect(Math.abs(metres - nearestByLooking(roads, at))).toBeLessThan(0.5);
      }
    });
  }
  if (extracts.length === 1)
    it.skip('are driven as Dijkstra drives them: real extracts need THAWLINE_TEST_DATA', () => {});
});

/** Metres to the nearest of many points along every road. */
function nearestByLooking({ graph }: BuiltRoads, [lon, lat]: LonLat): number {
  const squeeze = Math.cos((lat * Math.PI) / 180);
  let least = Infinity;
  for (let segment = 0; segment < graph.segmentCount; segment++) {
    const line = lineOf(graph, segment);
    for (let i = 1; i < line.length; i++) {
      const [a, b] = [line[i - 1]!, line[i]!];
      const [dx, dy] = [(b[0] - a[0]) * squeeze, b[1] - a[1]];
      const [px, py] = [(lon - a[0]) * squeeze, lat - a[1]];
      const along = Math.min(1, Math.max(0, (px * dx + py * dy) / (dx * dx + dy * dy || 1)));
      least = Math.min(least, Math.hypot(px - along * dx, py - along * dy));
    }
  }
  return least * 111_195.08;
}

const lengthOf = ({ lons, lats }: Segment): number =>
  lons
    .slice(1)
    .reduce(
      (sum, lon, i) =>
        sum +
        greatCircleKm([lons[i]! / 1e7, lats[i]! / 1e7], [lon / 1e7, lats[i + 1]! / 1e7]) * 1000,
      0,
    );
