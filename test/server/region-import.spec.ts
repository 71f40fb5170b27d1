import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { join } from 'node:path';
import express from 'express';
import request from 'supertest';
import { ACCEPT_CONFIDENCE } from '../../shared/domain/address/address-suggestion';
import { AddressIndex } from '../../server/region/address-index';
import type { AddressBook, AddressPoint } from '../../server/region/address-points';
import { chanceOf } from '../../server/region/county/chance';
import { ensureDemoRegion, listRegions } from '../../server/region/demo-region';
import { importRegion, type ImportedRegion } from '../../server/region/import-region';
import type { ImportStep } from '../../server/region/region-making';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';
import { readAddressBook } from '../../server/region/region-data';
import { tileRoutes } from '../../server/region/serve-tiles';
import { decodeTile, temporaryFolder } from '../support/region-files';

jest.setTimeout(180_000);

const tiles = temporaryFolder();
const steps: ImportStep[] = [];
let demo: ImportedRegion;
let book: AddressBook;
let index: AddressIndex;

beforeAll(async () => {
  demo = await ensureDemoRegion(tiles.path, (step) => steps.push(step));
  book = await readAddressBook(demo.folder);
  index = new AddressIndex(book);
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
      'green',
      'land',
      'places',
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
    const again = await ensureDemoRegion(tiles.path, (step) => done.push(step));
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
    'addresses.json.gz',
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

/** Draws addresses evenly, and spoils what is typed of them, the same way each time. */
const chance = chanceOf(17, 'address-test');
const samples = (count: number): AddressPoint[] =>
  Array.from({ length: count }, () => chance.pick(book.addresses));

function slip(word: string): string {
  const i = 1 + chance.below(Math.max(1, word.length - 2));
  const letter = chance.pick([...'abcdefghijklmnopqrstuvwxyz']);
  switch (chance.below(4)) {
    case 0:
      return word.slice(0, i) + word.slice(i + 1);
    case 1:
      return word.slice(0, i) + letter + word.slice(i);
    case 2:
      return word.slice(0, i) + letter + word.slice(i + 1);
    default:
      return word.slice(0, i) + word.charAt(i + 1) + word.charAt(i) + word.slice(i + 2);
  }
}

/** Spoils the longest word of a street, when it is long enough to be known again. */
function misspelt(street: string): string {
  const words = street.split(' ');
  const longest = words.reduce(
    (best, word, i) => (word.length > words[best]!.length ? i : best),
    0,
  );
  if (/^\d/.test(words[longest]!) || words[longest]!.length < 5) return street;
  words[longest] = slip(words[longest]!);
  return words.join(' ');
}

describe('AddressIndex', () => {
  const isAt = (
    point: AddressPoint,
    found: { lon: number; lat: number } | null | undefined,
  ): boolean => found?.lon === point.at[0] && found.lat === point.at[1];

  it.each<[string, (a: AddressPoint) => string, number]>([
    ['as they stand', (a) => `${a.number} ${a.street}, ${a.city}`, 1],
    ['in capitals without a comma', (a) => `${a.number} ${a.street} ${a.city}`.toUpperCase(), 0.99],
    ['number last', (a) => `${a.street} ${a.number}, ${a.city}`, 0.99],
    [
      'with unit and postcode',
      (a) => `${a.number} ${a.street} apt ${1 + chance.below(30)}, ${a.city} ${a.postcode}`,
      0.99,
    ],
    ['with a slip in the street', (a) => `${a.number} ${misspelt(a.street)}, ${a.city}`, 0.95],
    [
      'without the street type',
      (a) => `${a.number} ${a.street.split(' ').slice(0, -1).join(' ')}, ${a.city}`,
      0.95,
    ],
    [
      'without the direction',
      (a) => `${a.number} ${a.street.replace(/^(North|South|East|West) /, '')}, ${a.city}`,
      0.95,
    ],
  ])('finds addresses first that are written %s', (_, write, share) => {
    const points = samples(250);
    const right = points.filter((point) => isAt(point, index.suggest(write(point))[0]));
    expect(right.length / points.length).toBeGreaterThanOrEqual(share);
  });

  it('never accepts another house than the one that was meant', () => {
    const forms: ((a: AddressPoint) => string)[] = [
      (a) => `${a.number} ${a.street}`,
      (a) => `${a.number} ${misspelt(a.street)}`,
      (a) => `${a.street.split(' ').slice(0, -1).join(' ')} ${a.number}, ${a.city}`,
    ];
    const wrong: string[] = [];
    let accepted = 0;
    for (const point of samples(400)) {
      for (const form of forms) {
        const text = form(point);
        const found = index.locate(text);
        if (!found || found.confidence < ACCEPT_CONFIDENCE) continue;
        accepted++;
        if (!isAt(point, found)) wrong.push(`${text} -> ${found.label}`);
      }
    }
    // One slip may turn one street's name into another's; that happens to people too.
    expect(wrong.length).toBeLessThanOrEqual(3);
    expect(accepted).toBeGreaterThan(600);
  });

  it('finds a house while its street is still being typed', () => {
    const points = samples(150);
    const right = points.filter((point) => {
      const street = point.street.split(' ').slice(0, 2).join(' ');
      const typed = `${point.number} ${street.slice(0, Math.max(4, street.length - 2))}`;
      return index.suggest(typed, { near: point.at }).some((found) => isAt(point, found));
    });
    expect(right.length / points.length).toBeGreaterThan(0.9);
  });

  it('keeps the unit, for the technician at the door', () => {
    const [point] = samples(1);
    const found = index.suggest(`${point!.number} ${point!.street} apt 4b, ${point!.city}`)[0];
    expect(found).toMatchObject({ unit: 'Apt 4B', kind: 'rooftop', number: point!.number });
    expect(found?.label).toContain('Apt 4B');
  });

  it('offers every town that has the house when none is named, and accepts none', () => {
    const doors = new Map<string, AddressPoint[]>();
    for (const point of book.addresses) {
      const key = `${point.number} ${point.street}`;
      doors.set(key, [...(doors.get(key) ?? []), point]);
    }
    const [text, points] = [...doors].find(([, own]) => own.length === 2)!;
    const found = index.suggest(text).filter(({ kind }) => kind === 'rooftop');
    expect(
      found
        .slice(0, 2)
        .map(({ city }) => city)
        .sort(),
    ).toEqual(points.map(({ city }) => city).sort());
    expect(index.locate(text)!.confidence).toBeLessThan(ACCEPT_CONFIDENCE);
  });

  it('puts a missing house between its neighbours', () => {
    const point = book.addresses.find(
      (a) =>
        index.suggest(`${Number(a.number) + 2} ${a.street}, ${a.city}`)[0]?.kind === 'interpolated',
    )!;
    const found = index.suggest(`${Number(point.number) + 2} ${point.street}, ${point.city}`)[0]!;
    expect(
      Math.hypot((found.lon - point.at[0]) * 89_701, (found.lat - point.at[1]) * 110_972),
    ).toBeLessThan(150);
  });

  it('finds a corner by its two streets, in either order', () => {
    const corner = book.corners.find(({ city }) => city === 'Gullwick')!;
    for (const text of [
      `${corner.first} & ${corner.second}, Gullwick`,
      `corner of ${corner.second} and ${corner.first}, gullwick`,
    ]) {
      const found = index.suggest(text)[0];
      expect(found).toMatchObject({ kind: 'corner', city: 'Gullwick' });
      expect(book.corners.some(({ at }) => at[0] === found!.lon && at[1] === found!.lat)).toBe(
        true,
      );
    }
  });

  it('finds places by name', () => {
    expect(index.suggest('ternhaven clinic')[0]).toMatchObject({
      kind: 'place',
      street: 'Ternhaven Clinic',
    });
    expect(index.suggest('gullwick')[0]).toMatchObject({ kind: 'place', label: 'Gullwick' });
  });

  it('names a pin by the house beside it, and leaves it where it was set', () => {
    const [point] = samples(1);
    const [lon, lat] = [point!.at[0] + 0.00005, point!.at[1]];
    expect(index.nearest(lon, lat)).toMatchObject({
      kind: 'pin',
      lon,
      lat,
      number: point!.number,
      city: point!.city,
    });
    expect(index.nearest(-47.36, 36.2)).toMatchObject({
      kind: 'pin',
      number: null,
      label: 'Pin at 36.20000, -47.36000',
    });
  });

  it.each(['', '   ', '12', 'PO Box 12', 'zzzzqqqq', ',,,', '&'])(
    'has nothing to offer for %p',
    (text) => {
      expect(index.suggest(text)).toEqual([]);
      expect(index.locate(text)).toBeNull();
    },
  );
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
