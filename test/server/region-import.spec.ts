import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { join } from 'node:path';
import express from 'express';
import request from 'supertest';
import { AddressIndex } from '../../server/region/address-index';
import type { AddressBook } from '../../server/region/address-points';
import { listRegions } from '../../server/region/demo-region';
import { importRegion, type ImportedRegion } from '../../server/region/import-region';
import { readFeeders } from '../../server/region/feeders-file';
import { openRegion } from '../../server/region/open-region';
import type { ImportStep } from '../../server/region/region-making';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';
import { readAddressBook } from '../../server/region/region-data';
import { tileRoutes } from '../../server/region/serve-tiles';
import { demoRegion, keepDemoRegion } from '../support/demo-county';
import { decodeTile, temporaryFolder } from '../support/region-files';

const tiles = temporaryFolder();
const steps: ImportStep[] = [];
let demo: ImportedRegion;
let book: AddressBook;

beforeAll(async () => {
  demo = await demoRegion(tiles.path, (step) => steps.push(step));
  keepDemoRegion(demo);
  book = await readAddressBook(demo.folder);
});
afterAll(() => tiles.remove());

const filesUnder = (folder: string): string[] =>
  readdirSync(folder, { recursive: true, encoding: 'utf8' }).filter((path) =>
    path.endsWith('.pbf'),
  );

describe('the demo region', () => {
  it('has tiles from zoom 8 to 14 and house numbers at 16', () => {
    for (const z of [8, 9, 10, 11, 12, 13, 14])
      expect(filesUnder(join(demo.folder, String(z))).length).toBeGreaterThan(0);
    expect(filesUnder(join(demo.folder, 'addr', '16')).length).toBeGreaterThan(500);
    expect(filesUnder(demo.folder).length).toBe(demo.manifest.counts.tiles);
  });

  it('has tiles that decode, with every layer that the map draws', () => {
    const names = new Set<string>();
    for (const path of filesUnder(demo.folder)) {
      for (const layer of decodeTile(readFileSync(join(demo.folder, path)))) {
        expect([layer.version, layer.extent]).toEqual([2, 4_096]);
        expect(layer.features.length).toBeGreaterThan(0);
        names.add(layer.name);
      }
    }
    expect([...names].sort()).toEqual([
      'addresses',
      'buildings',
      'green',
      'land',
      'places',
      'power',
      'roads',
      'water',
      'waterways',
    ]);
  });

  it('shows great roads from afar and small ones near by', () => {
    const classesAt = (z: number): Set<unknown> =>
      new Set(
        filesUnder(join(demo.folder, String(z)))
          .flatMap((path) => decodeTile(readFileSync(join(demo.folder, String(z), path))))
          .filter(({ name }) => name === 'roads')
          .flatMap(({ features }) => features.map(({ properties }) => properties['class'])),
      );
    expect(classesAt(8)).toEqual(new Set(['primary', 'secondary']));
    expect(classesAt(14)).toEqual(new Set(['primary', 'secondary', 'tertiary', 'local']));
  });

  it('carries all house numbers in the tiles above the map', () => {
    const numbers = filesUnder(join(demo.folder, 'addr')).flatMap((path) =>
      decodeTile(readFileSync(join(demo.folder, 'addr', path))).flatMap(({ features }) => features),
    );
    expect(numbers.length).toBe(book.addresses.length);
    expect(
      numbers.every(
        ({ type, properties }) => type === 1 && /^\d+$/.test(String(properties['number'])),
      ),
    ).toBe(true);
  });

  it('stays small enough to be fetched whole', () =>
    expect(demo.manifest.counts.bytes).toBeLessThan(4_000_000));

  it('knows its feeders, whose customers are its addresses', async () => {
    const { feeders, substations } = await readFeeders(demo.folder);
    expect(feeders.length).toBe(60);
    expect(substations.length).toBeGreaterThan(5);
    expect(demo.manifest.counts.feeders).toBe(feeders.length);
    expect(feeders.reduce((sum, { customers }) => sum + customers, 0)).toBe(book.addresses.length);
    expect((await openRegion(demo)).power.feeders).toEqual(feeders);
  });

  it('says what it is', () => {
    expect(demo.manifest).toMatchObject({
      name: 'Skerry County',
      hasCoastline: true,
      minZoom: 8,
      maxZoom: 14,
      addressZoom: 16,
    });
    expect(demo.manifest.attribution).toMatch(/invented/);
    expect(
      Intl.DateTimeFormat('en', { timeZone: demo.manifest.timeZone }).resolvedOptions().timeZone,
    ).toBe(demo.manifest.timeZone);
    expect(demo.manifest.counts.addresses).toBe(book.addresses.length);
    expect(book.addresses.length).toBeGreaterThan(25_000);
  });

  it('tells its progress, from reading to done', () => {
    expect(steps[steps.length - 1]).toEqual({ step: 'done', share: 1 });
    const shares = steps.map(({ share }) => share);
    expect(shares).toEqual([...shares].sort((a, b) => a - b));
  });

  it('is used as it is the second time', async () => {
    const before = statSync(join(demo.folder, 'region.json')).mtimeMs;
    const done: ImportStep[] = [];
    const again = await demoRegion(tiles.path, (step) => done.push(step));
    expect(done).toEqual([]);
    expect(again.folder).toBe(demo.folder);
    expect(statSync(join(demo.folder, 'region.json')).mtimeMs).toBe(before);
  });
});

describe('tileRoutes', () => {
  const app = express().use('/tiles', tileRoutes(tiles.path));
  const url = (path: string): string => `/tiles/${demo.manifest.id}-${demo.manifest.hash}/${path}`;

  it('sends a tile packed, to be kept for good', async () => {
    const [tile] = filesUnder(join(demo.folder, '14'));
    const reply = await request(app)
      .get(url(`14/${tile}`))
      .buffer(true);
    expect(reply.status).toBe(200);
    expect(reply.headers).toMatchObject({
      'content-encoding': 'gzip',
      'content-type': 'application/x-protobuf',
    });
    expect(reply.headers['cache-control']).toMatch(/immutable/);
  });

  it('answers empty ground with nothing at all, which the map library takes', async () => {
    const reply = await request(app).get(url('14/0/0.pbf'));
    expect([reply.status, reply.text]).toEqual([204, '']);
  });

  it.each([
    'region.json',
    'addresses.bin',
    '..%2f..%2fpackage.json',
    '14/x/1.pbf',
    '../../../etc/passwd',
  ])('keeps %s to itself', async (path) => {
    expect((await request(app).get(url(path))).status).toBe(404);
  });

  it('takes no other method', async () => {
    expect((await request(app).post(url('14/0/0.pbf'))).status).toBe(405);
  });
});

/** Two crossing streets and a house, enough for an import. */
const HAMLET = writeOsmPbf(
  {
    nodes: [
      { id: 1, lon: -47.7, lat: 36.4, tags: {} },
      { id: 2, lon: -47.69, lat: 36.4, tags: {} },
      { id: 3, lon: -47.695, lat: 36.405, tags: {} },
      { id: 4, lon: -47.695, lat: 36.4, tags: {} },
      {
        id: 5,
        lon: -47.696,
        lat: 36.4002,
        tags: { 'addr:housenumber': '12;14', 'addr:street': 'Larch Lane', 'addr:flats': '1-4' },
      },
      { id: 6, lon: -47.6955, lat: 36.4001, tags: { place: 'hamlet', name: 'Sedge Corner' } },
    ],
    ways: [
      { id: 1, refs: [1, 4, 2, 99], tags: { highway: 'residential', name: 'Larch Lane' } },
      { id: 2, refs: [3, 4], tags: { highway: 'residential', name: 'Heron Street' } },
    ],
    relations: [],
  },
  'test',
);

describe('importRegion', () => {
  const order = { pbf: HAMLET, name: 'Sedge Corner', timeZone: 'UTC', attribution: 'invented' };

  it('takes land for the ground where there is no coast, and fills in the town', async () => {
    const folder = temporaryFolder();
    const { manifest, folder: made } = await importRegion({ ...order, outFolder: folder.path });
    const hamlet = await readAddressBook(made);
    expect(manifest).toMatchObject({ id: 'sedge-corner', hasCoastline: false, origin: null });
    expect(hamlet.addresses.map(({ number, city, flats }) => [number, city, flats])).toEqual([
      ['12', 'Sedge Corner', 4],
      ['14', 'Sedge Corner', 4],
    ]);
    expect(hamlet.corners).toEqual([
      { first: 'Heron Street', second: 'Larch Lane', city: 'Sedge Corner', at: [-47.695, 36.4] },
    ]);
    expect((await listRegions(folder.path)).map((region) => region.manifest.id)).toEqual([
      'sedge-corner',
    ]);
    folder.remove();
  });

  it('makes one region when two imports race', async () => {
    const folder = temporaryFolder();
    const made = await Promise.all(
      [1, 2, 3].map(() => importRegion({ ...order, outFolder: folder.path })),
    );
    expect(new Set(made.map((region) => region.folder)).size).toBe(1);
    expect(readdirSync(folder.path)).toEqual([`sedge-corner-${made[0]!.manifest.hash}`]);
    folder.remove();
  });

  it('leaves nothing behind when the file is damaged', async () => {
    const folder = temporaryFolder();
    const damaged = { ...order, pbf: HAMLET.slice(0, -9), outFolder: folder.path };
    await expect(importRegion(damaged)).rejects.toThrow(/ends in the middle/);
    await expect(
      importRegion({ ...order, pbf: join(folder.path, 'none.osm.pbf'), outFolder: folder.path }),
    ).rejects.toThrow(/cannot be read/);
    expect(readdirSync(folder.path)).toEqual([]);
    folder.remove();
  });
});

const extracts = process.env['THAWLINE_TEST_DATA'];
(extracts ? describe : describe.skip)('real extracts (need THAWLINE_TEST_DATA)', () => {
  const importReal = (file: string, name: string): Promise<ImportedRegion> =>
    importRegion({
      pbf: join(extracts ?? '', 'osm', file),
      outFolder: tiles.path,
      name,
      timeZone: 'America/New_York',
      attribution: 'x',
    });

  it('imports Queens Village, with its hyphenated numbers', async () => {
    const { manifest, folder } = await importReal('queens-village.osm.pbf', 'Queens Village');
    expect(manifest.counts.addresses).toBeGreaterThan(32_000);
    const queens = await AddressIndex.open(folder);
    for (const text of [
      '218-09 94 road',
      '21809 94th Rd',
      '94th rd 218-09',
      '218-09 94th Road, Queens Village',
    ]) {
      expect(queens.suggest(text)[0]).toMatchObject({
        number: expect.stringMatching(/^218-?09$/),
        street: '94th Rd',
        kind: 'rooftop',
      });
    }
    expect(queens.suggest('jamaica ave & springfield blvd')[0]).toMatchObject({ kind: 'corner' });
  });

  it('imports Harrisburg, a town with few addresses', async () => {
    const { manifest, folder } = await importReal('harrisburg.osm.pbf', 'Harrisburg');
    expect(manifest.counts.streets).toBeGreaterThan(1_000);
    expect(existsSync(join(folder, '14'))).toBe(true);
  });
});
