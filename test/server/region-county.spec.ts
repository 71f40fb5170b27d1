import Flatbush from 'flatbush';
import { makeCounty, type County } from '../../server/region/county/county';
import { fingerprintOf } from '../../server/region/county/fingerprint';
import { countyToOsm, countyToPbf } from '../../server/region/county/write-county';
import { DEMO_DATA, DEMO_SEED } from '../../server/region/demo-region';
import type { OsmNode, OsmWay } from '../../server/region/osm-model';
import { keepDemoCounty } from '../support/demo-county';
import { readAll, type ReadOsm } from '../support/region-files';

type Spot = readonly [x: number, y: number];

/** Metres by the local radius of the WGS84 ellipsoid, apart from the generator's own plane. */
const METRES_LAT = 110_972;
const METRES_LON = 89_701;
const spot = ({ lon, lat }: { lon: number; lat: number }): Spot => [
  lon * METRES_LON,
  lat * METRES_LAT,
];
const gap = (a: Spot, b: Spot): number => Math.hypot(a[0] - b[0], a[1] - b[1]);

function toSegment(p: Spot, a: Spot, b: Spot): number {
  const [dx, dy] = [b[0] - a[0], b[1] - a[1]];
  const square = dx * dx + dy * dy;
  const share =
    square === 0 ? 0 : Math.min(1, Math.max(0, ((p[0] - a[0]) * dx + (p[1] - a[1]) * dy) / square));
  return gap(p, [a[0] + dx * share, a[1] + dy * share]);
}

function isInside([x, y]: Spot, ring: readonly Spot[]): boolean {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const [a, b] = [ring[i]!, ring[j]!];
    if (a[1] > y !== b[1] > y && x < ((b[0] - a[0]) * (y - a[1])) / (b[1] - a[1]) + a[0])
      inside = !inside;
  }
  return inside;
}

/** Joins coastline ways by the nodes that they share. */
function coastRings(osm: ReadOsm): Spot[][] {
  const open = osm.ways
    .filter(({ tags }) => tags['natural'] === 'coastline')
    .map(({ refs }) => [...refs]);
  const rings: number[][] = [];
  for (let ring = open.pop(); ring; ring = open.pop()) {
    while (ring[0] !== ring[ring.length - 1]) {
      const end = ring[ring.length - 1];
      const next = open.findIndex((refs) => refs[0] === end);
      if (next < 0) throw new Error('The coast is not closed.');
      ring.push(...open.splice(next, 1)[0]!.slice(1));
    }
    rings.push(ring);
  }
  return rings.map((refs) => refs.map((ref) => spot(osm.nodes.get(ref)!)));
}

let county: County;
let osm: ReadOsm;
let roads: OsmWay[];
let houses: OsmNode[];

beforeAll(async () => {
  county = makeCounty(DEMO_SEED);
  const pbf = countyToPbf(county);
  keepDemoCounty(pbf);
  osm = await readAll(pbf);
  roads = osm.ways.filter(({ tags }) => tags['highway'] !== undefined);
  houses = [...osm.nodes.values()].filter(
    ({ tags }) => tags['addr:housenumber'] !== undefined && tags['name'] === undefined,
  );
});

describe('the invented county', () => {
  it('is the one that the demo region is known by', () => {
    const { nodes, ways, relations } = countyToOsm(county);
    expect(fingerprintOf({ nodes, ways, relations })).toBe(DEMO_DATA);
  });

  // That the same seed gives the same again, the fingerprint says.
  it('is another for another seed', () => {
    const { nodes, ways, relations } = countyToOsm(makeCounty(DEMO_SEED + 1));
    expect(fingerprintOf({ nodes, ways, relations })).not.toBe(DEMO_DATA);
  });

  it('lies in the open Atlantic', () => {
    const outside = [...osm.nodes.values()].filter(
      ({ lon, lat }) => !(lon > -48.1 && lon < -47.3 && lat > 36.1 && lat < 36.7),
    );
    expect(outside).toEqual([]);
  });

  it('has between 30,000 and 38,000 addresses, all with street, city and an invented postcode', () => {
    expect(houses.length).toBeGreaterThan(30_000);
    expect(houses.length).toBeLessThan(38_000);
    const lacking = houses.filter(
      ({ tags }) =>
        !/^000\d\d$/.test(tags['addr:postcode'] ?? '') ||
        !tags['addr:street'] ||
        !tags['addr:city'],
    );
    expect(lacking).toEqual([]);
  });

  it('gives no address twice', () => {
    const lines = houses.map(
      ({ tags }) => `${tags['addr:housenumber']} ${tags['addr:street']} ${tags['addr:city']}`,
    );
    expect(new Set(lines).size).toBe(lines.length);
  });

  it('gives plausible house numbers', () => {
    const numbers = houses.map(({ tags }) => Number(tags['addr:housenumber']));
    expect(numbers.every((n) => Number.isInteger(n) && n > 0 && n < 10_000)).toBe(true);
    const even = numbers.filter((n) => n % 2 === 0).length / numbers.length;
    expect(even).toBeGreaterThan(0.45);
    expect(even).toBeLessThan(0.55);
  });

  it('sets every address within 60 m of its own street', () => {
    const byName = new Map<string, [Spot, Spot][]>();
    for (const { tags, refs } of roads) {
      const segments = byName.get(tags['name'] ?? '') ?? [];
      byName.set(tags['name'] ?? '', segments);
      for (let i = 1; i < refs.length; i++)
        segments.push([spot(osm.nodes.get(refs[i - 1]!)!), spot(osm.nodes.get(refs[i]!)!)]);
    }
    const far = houses.filter((house) => {
      const p = spot(house);
      return !(byName.get(house.tags['addr:street']!) ?? []).some(
        ([a, b]) => toSegment(p, a, b) <= 60,
      );
    });
    expect(far.map(({ tags }) => tags)).toEqual([]);
  });

  it('counts houses along each street, odd on one side and even on the other', () => {
    // Houses by the nearest way of their street, as (side, metres along it, number).
    const ways = new Map<string, Spot[][]>();
    for (const { tags, refs } of roads) {
      const known = ways.get(tags['name'] ?? '') ?? [];
      ways.set(tags['name'] ?? '', known);
      known.push(refs.map((ref) => spot(osm.nodes.get(ref)!)));
    }
    const along = new Map<Spot[], { side: boolean; metres: number; number: number }[]>();
    for (const house of houses) {
      const p = spot(house);
      let best = { off: Infinity, side: false, metres: 0, way: [] as Spot[] };
      for (const way of ways.get(house.tags['addr:street']!) ?? []) {
        let walked = 0;
        for (let i = 1; i < way.length; i++) {
          const [a, b] = [way[i - 1]!, way[i]!];
          const off = toSegment(p, a, b);
          if (off < best.off) {
            const left = (b[0] - a[0]) * (p[1] - a[1]) - (b[1] - a[1]) * (p[0] - a[0]) > 0;
            best = { off, side: left, metres: walked + gap(a, p), way };
          }
          walked += gap(a, b);
        }
      }
      const own = along.get(best.way) ?? [];
      along.set(best.way, own);
      own.push({
        side: best.side,
        metres: best.metres,
        number: Number(house.tags['addr:housenumber']),
      });
    }
    let [misplaced, backward, pairs] = [0, 0, 0];
    for (const own of along.values()) {
      const isOddLeft =
        own.filter(({ side, number }) => side === number % 2 > 0).length * 2 > own.length;
      misplaced += own.filter(({ side, number }) => (side === number % 2 > 0) !== isOddLeft).length;
      for (const side of [true, false]) {
        const walk = own.filter((house) => house.side === side).sort((a, b) => a.metres - b.metres);
        const steps = walk.slice(1).map(({ number }, i) => Math.sign(number - walk[i]!.number));
        const up = steps.filter((step) => step > 0).length;
        const down = steps.filter((step) => step < 0).length;
        backward += Math.min(up, down);
        pairs += steps.length;
      }
    }
    // Houses in a bend or behind a dead end may be nearer to another stretch of their street.
    expect(pairs).toBeGreaterThan(20_000);
    expect(misplaced / houses.length).toBeLessThan(0.01);
    expect(backward / pairs).toBeLessThan(0.01);
  });

  it('keeps every road on dry ground unless it is a bridge', () => {
    const land = coastRings(osm);
    const waters = osm.ways
      .filter(({ tags }) => tags['natural'] === 'water')
      .map(({ refs }) => refs.map((ref) => spot(osm.nodes.get(ref)!)));
    const box = (ring: readonly Spot[]): [number, number, number, number] => [
      Math.min(...ring.map(([x]) => x)),
      Math.min(...ring.map(([, y]) => y)),
      Math.max(...ring.map(([x]) => x)),
      Math.max(...ring.map(([, y]) => y)),
    ];
    const indexOf = (rings: readonly Spot[][]): Flatbush => {
      const index = new Flatbush(rings.length);
      rings.forEach((ring) => index.add(...box(ring)));
      index.finish();
      return index;
    };
    const landIndex = indexOf(land);
    const waterIndex = indexOf(waters);
    const isIn = (p: Spot, rings: readonly Spot[][], index: Flatbush): boolean =>
      index.search(p[0], p[1], p[0], p[1]).some((i) => isInside(p, rings[i]!));
    const wet: string[] = [];
    for (const { tags, refs } of roads) {
      if (tags['bridge'] === 'yes' || tags['ford'] === 'yes') continue;
      refs.forEach((ref, i) => {
        const a = spot(osm.nodes.get(ref)!);
        const b = spot(osm.nodes.get(refs[Math.min(i + 1, refs.length - 1)]!)!);
        for (const p of [a, [(a[0] + b[0]) / 2, (a[1] + b[1]) / 2] as const]) {
          if (!isIn(p, land, landIndex) || isIn(p, waters, waterIndex))
            wet.push(`${tags['name']} ${ref}`);
        }
      });
    }
    expect(wet).toEqual([]);
    expect(roads.some(({ tags }) => tags['bridge'] === 'yes')).toBe(true);
  });

  it('leaves the inlets of the barrier strip without a bridge', () => {
    const inletNodes = roads
      .flatMap(({ tags, refs }) => (tags['bridge'] === 'yes' ? refs : []))
      .map((ref) => osm.nodes.get(ref)!);
    for (const northing of county.terrain.inlets) {
      const [x, y] = county.terrain.barrierAt(northing);
      const inlet: Spot = [-47.7 * METRES_LON + x, 36.4 * METRES_LAT + y];
      expect(inletNodes.some((node) => gap(spot(node), inlet) < 400)).toBe(false);
    }
  });

  it('has what a town needs, and a marina', () => {
    const tags = [...osm.nodes.values()].map((node) => node.tags);
    for (const [key, value] of [
      ['amenity', 'clinic'],
      ['amenity', 'school'],
      ['amenity', 'hospital'],
      ['shop', 'supermarket'],
      ['leisure', 'marina'],
      ['place', 'city'],
      ['place', 'town'],
      ['place', 'village'],
      ['place', 'hamlet'],
    ] as const) {
      expect(tags.filter((own) => own[key] === value && own['name']).length).toBeGreaterThan(0);
    }
  });

  it('repeats some street names in several towns, as counties do', () => {
    const cities = new Map<string, Set<string>>();
    for (const { tags } of houses)
      cities.set(
        tags['addr:street']!,
        (cities.get(tags['addr:street']!) ?? new Set()).add(tags['addr:city']!),
      );
    expect([...cities.values()].filter((own) => own.size > 1).length).toBeGreaterThan(50);
  });
});
