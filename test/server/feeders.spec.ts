import { FeederMap } from '@shared/contract/feeders';
import { ownAddresses } from '../../server/region/address-points';
import { feedersOf, NO_FEEDERS } from '../../server/region/feeders';
import { readFeeders, writeFeeders } from '../../server/region/feeders-file';
import { readExtract } from '../../server/region/osm-extract';
import type { OsmData, OsmNode, OsmWay } from '../../server/region/osm-model';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';
import { HAMLET_DATA, hamletPbf } from '../support/hamlet';
import { temporaryFolder } from '../support/region-files';
import { startServer, type TestServer } from '../support/server';
import { TEST_REGION } from '../support/region';

const read = async (data: OsmData) => {
  const extract = await readExtract(writeOsmPbf(data, 'test'));
  return feedersOf(extract, ownAddresses(extract));
};

/** A square of nodes and the closed way around it. */
function square(
  id: number,
  west: number,
  south: number,
  size: number,
  tags: OsmWay['tags'],
): { nodes: OsmNode[]; way: OsmWay } {
  const corners = [
    [west, south],
    [west + size, south],
    [west + size, south + size],
    [west, south + size],
  ] as const;
  const nodes = corners.map(([lon, lat], i) => ({ id: id + i, lon, lat, tags: {} }));
  return { nodes, way: { id, refs: [id, id + 1, id + 2, id + 3, id], tags } };
}

/** With: the parts that a test is about; the hamlet's three houses lie about 36.4 N 47.695 W. */
const hamletWith = (
  squares: readonly { nodes: OsmNode[]; way: OsmWay }[],
  more: Partial<OsmData> = {},
): OsmData => ({
  nodes: [...HAMLET_DATA.nodes, ...squares.flatMap(({ nodes }) => nodes), ...(more.nodes ?? [])],
  ways: [...HAMLET_DATA.ways, ...squares.map(({ way }) => way), ...(more.ways ?? [])],
  relations: [...HAMLET_DATA.relations, ...(more.relations ?? [])],
});

const area = (ref: string, more: OsmWay['tags'] = {}): OsmWay['tags'] => ({
  boundary: 'power_feeder',
  ref,
  ...more,
});

describe('the feeders of an extract', () => {
  it('are none where the data knows of none', async () => {
    expect(feedersOf(await readExtract(hamletPbf()), [])).toEqual(NO_FEEDERS);
  });

  it('have a name, a substation, their customers and their plan of repair', async () => {
    const { feeders, substations } = await read(
      hamletWith(
        [
          square(
            100,
            -47.698,
            36.3995,
            0.0025,
            area('H-2', {
              name: 'Heron 2',
              substation: 'Heron Substation',
              'restoration:wave': '2',
              'restoration:hours': '6.5',
            }),
          ),
          square(110, -47.6945, 36.4025, 0.001, area('H-1')),
        ],
        {
          nodes: [
            {
              id: 120,
              lon: -47.6975,
              lat: 36.4,
              tags: { power: 'substation', name: 'Heron Substation' },
            },
          ],
          ways: [{ id: 121, refs: [120, 101], tags: { power: 'minor_line', ref: 'H-2' } }],
        },
      ),
    );
    expect(feeders.map(({ id, name, customers }) => ({ id, name, customers }))).toEqual([
      { id: 'H-1', name: 'H-1', customers: 1 },
      { id: 'H-2', name: 'Heron 2', customers: 2 },
    ]);
    expect(feeders[0]).toMatchObject({ substation: '', trunk: [], wave: null });
    expect(feeders[1]).toMatchObject({
      substation: 'Heron Substation',
      trunk: [
        [
          [-47.6975, 36.4],
          [-47.6955, 36.3995],
        ],
      ],
      wave: { order: 2, hours: 6.5 },
    });
    expect(substations).toEqual([{ name: 'Heron Substation', at: [-47.6975, 36.4] }]);
  });

  it('may have parts and holes, and nobody in a hole is a customer', async () => {
    const outer = square(100, -47.7, 36.399, 0.01, {});
    const hole = square(110, -47.698, 36.3995, 0.0025, {});
    const island = square(120, -47.68, 36.4, 0.001, {});
    const { feeders } = await read(
      hamletWith([outer, hole, island], {
        relations: [
          {
            id: 50,
            members: [
              { type: 'way', ref: outer.way.id, role: 'outer' },
              { type: 'way', ref: hole.way.id, role: 'inner' },
              { type: 'way', ref: island.way.id, role: 'outer' },
            ],
            tags: area('H-3', { type: 'multipolygon' }),
          },
        ],
      }),
    );
    expect(feeders).toHaveLength(1);
    expect(feeders[0]!.polygons.map((rings) => rings.length).sort()).toEqual([1, 2]);
    expect(feeders[0]!.customers).toBe(1);
  });

  it.each([
    ['no hours', { 'restoration:wave': '1' }],
    ['no wave', { 'restoration:hours': '4' }],
    ['a wave that is no whole number', { 'restoration:wave': '1.5', 'restoration:hours': '4' }],
    ['hours before the storm', { 'restoration:wave': '1', 'restoration:hours': '-4' }],
    ['words', { 'restoration:wave': 'first', 'restoration:hours': 'soon' }],
  ])('have no plan when it says %s', async (_, plan) => {
    const { feeders } = await read(
      hamletWith([square(100, -47.7, 36.399, 0.01, area('H-4', plan))]),
    );
    expect(feeders[0]!.wave).toBeNull();
  });

  it('leave out an area that the extract has cut open or that has no name', async () => {
    const cut = square(100, -47.7, 36.399, 0.01, area('H-5'));
    const nameless = square(110, -47.7, 36.399, 0.01, { boundary: 'power_feeder' });
    const data = hamletWith([{ ...cut, nodes: cut.nodes.slice(1) }, nameless]);
    expect((await read(data)).feeders).toEqual([]);
  });

  it('are kept with the region, and an older region has none', async () => {
    const folder = temporaryFolder();
    expect(await readFeeders(folder.path)).toEqual(NO_FEEDERS);
    const map = await read(hamletWith([square(100, -47.7, 36.399, 0.01, area('H-6'))]));
    expect(map.feeders).toHaveLength(1);
    await writeFeeders(folder.path, map);
    expect(await readFeeders(folder.path)).toEqual(map);
    folder.remove();
  });
});

describe('GET /api/region/feeders', () => {
  let server: TestServer;
  let power: FeederMap;
  beforeAll(async () => {
    power = await read(hamletWith([square(100, -47.7, 36.399, 0.01, area('H-7'))]));
    server = await startServer({
      context: { region: { ...TEST_REGION, power } },
    });
  });
  afterAll(() => server.close());

  it('gives the desk the feeders of the region in use', async () => {
    const mara = await server.signIn('dispatcher');
    const reply = await mara.call('feeders');
    expect(reply.status).toBe(200);
    expect(FeederMap.parse(reply.body)).toEqual(power);
  });

  it('is not for technicians', async () => {
    const theo = await server.signIn('technician');
    expect((await theo.call('feeders')).status).toBe(403);
  });
});
