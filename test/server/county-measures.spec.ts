import { existsSync } from 'node:fs';
import path from 'node:path';
import { demoCountyPbf } from '../support/demo-county';
import { readAll, type ReadOsm } from '../support/region-files';
import { roadMeasures, type RoadMeasures } from '../support/road-measures';

let osm: ReadOsm;
let measures: RoadMeasures;

beforeAll(async () => {
  osm = await readAll(demoCountyPbf());
  measures = roadMeasures(osm);
});

const within = (value: number, least: number, most: number): void => {
  expect(value).toBeGreaterThanOrEqual(least);
  expect(value).toBeLessThanOrEqual(most);
};

/** The bounds lie about what the same function measures on real extracts; tiles/README.md has both. */
describe("the county's streets, beside those of real counties", () => {
  it('meet as streets do: dead ends, forks and crossings', () => {
    within(measures.degree[1], 0.12, 0.2);
    within(measures.degree[3], 0.4, 0.55);
    within(measures.degree[4], 0.28, 0.42);
    within(measures.degree.more, 0, 0.01);
    within(measures.meanDegree, 2.7, 3.3);
  });

  it('have short blocks in towns and long ones between them', () => {
    within(measures.block.p10, 40, 85);
    within(measures.block.p50, 80, 130);
    within(measures.block.p90, 220, 420);
  });

  it('lead about as crookedly to where one wants to go', () => {
    within(measures.far.p10, 1.1, 1.22);
    within(measures.far.p50, 1.18, 1.36);
    within(measures.far.p90, 1.3, 1.7);
    within(measures.near.p50, 1.2, 1.45);
  });

  it('have houses along them', () => within(measures.addressesPerKm, 15, 85));

  it('can be driven from anywhere to anywhere, one-way streets or not', () => {
    expect(measures.connected).toBe(1);
    const streets = osm.ways.filter(({ tags }) => tags['highway'] !== undefined);
    expect(streets.filter(({ tags }) => tags['oneway'] === 'yes').length).toBeGreaterThan(4);
  });

  it('are drawn without slivers', () => {
    expect(measures.shortestSegment).toBeGreaterThan(3);
    expect(measures.closestJunctions).toBeGreaterThan(6);
  });
});

describe('what drivers meet', () => {
  const waysWith = (key: string, value: string) =>
    osm.ways.filter(({ tags }) => tags[key] === value);

  it('is two causeways to the strip, of which one is under water in a storm', () => {
    const causeways = waysWith('bridge', 'yes').filter(({ tags }) =>
      tags['name']?.endsWith('Causeway'),
    );
    expect(new Set(causeways.map(({ tags }) => tags['name'])).size).toBe(2);
    const low = waysWith('flood_prone', 'yes');
    expect(new Set(low.map(({ tags }) => tags['name'])).size).toBe(1);
    expect(causeways.map(({ tags }) => tags['name'])).toContain(low[0]!.tags['name']);
  });

  it('is a ford, a ferry for cars and a locked gate', () => {
    expect(waysWith('ford', 'yes').length).toBeGreaterThan(0);
    const [ferry] = waysWith('route', 'ferry');
    expect(ferry?.tags).toMatchObject({
      motor_vehicle: 'yes',
      duration: expect.stringMatching(/^00:\d\d$/) as string,
    });
    const street = new Set(waysWith('highway', 'tertiary').flatMap(({ refs }) => refs));
    expect(ferry!.refs.every((ref) => street.has(ref))).toBe(true);
    const gates = [...osm.nodes.values()].filter(({ tags }) => tags['barrier'] === 'gate');
    expect(gates).toHaveLength(1);
  });

  it('is speed limits on the larger roads and turns that signs forbid', () => {
    const arterials = osm.ways.filter(({ tags }) =>
      ['primary', 'secondary', 'tertiary'].includes(tags['highway'] ?? ''),
    );
    expect(arterials.filter(({ tags }) => !/^\d\d mph$/.test(tags['maxspeed'] ?? ''))).toEqual([]);
    const turns = osm.relations.filter(({ tags }) => tags['type'] === 'restriction');
    expect(turns.length).toBeGreaterThan(5);
    const ways = new Map(osm.ways.map((way) => [way.id, way]));
    for (const { members } of turns) {
      const ends = (role: string): number[] => {
        const { refs } = ways.get(members.find((own) => own.role === role)!.ref)!;
        return [refs[0]!, refs[refs.length - 1]!];
      };
      // A rule speaks of ways that begin or end at its junction.
      const via = members.find(({ role }) => role === 'via')!.ref;
      expect(ends('from')).toContain(via);
      expect(ends('to')).toContain(via);
    }
  });
});

const DATA = process.env['THAWLINE_TEST_DATA'];
const fileOf = (name: string): string => path.join(DATA ?? '', 'osm', `${name}.osm.pbf`);
const hasData = DATA !== undefined && existsSync(fileOf('harrisburg'));

/** Open data that is not part of the project; without it these are skipped. */
(hasData ? describe : describe.skip)('real extracts, by THAWLINE_TEST_DATA', () => {
  it.each(['harrisburg', 'queens-village'])('%s has the like measures', async (name) => {
    const real = roadMeasures(await readAll(fileOf(name)));
    within(real.degree[1], 0.05, 0.3);
    within(real.degree[3], 0.4, 0.7);
    within(real.degree[4], 0.05, 0.45);
    within(real.block.p50, 60, 140);
    within(real.far.p50, 1.1, 1.5);
  });
});
