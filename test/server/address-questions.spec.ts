import { randomUUID } from 'node:crypto';
import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { ACCEPT_CONFIDENCE } from '../../shared/domain/address/address-suggestion';
import type { AddressSuggestion } from '../../shared/contract/calls';
import { AddressIndex } from '../../server/region/address-index';
import { bookOf, ownAddresses, type AddressBook } from '../../server/region/address-points';
import { readAddressTable } from '../../server/region/address-store';
import { nearAreas } from '../../server/region/nearness';
import { readExtract } from '../../server/region/osm-extract';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';
import { readAddressBook, writeAddressBook } from '../../server/region/region-data';
import { TEST_REGION } from '../support/region';
import { temporaryFolder } from '../support/region-files';
import { NIGHT, startServer, type TestServer } from '../support/server';

type At = readonly [number, number];

/** Houses along a street, each a little farther east. */
const houses = (street: string, city: string, postcode: string, from: At, numbers: string[]) =>
  numbers.map((number, i) => ({
    number,
    street,
    city,
    postcode,
    flats: 1,
    at: [from[0] + i * 0.0003, from[1]] as At,
  }));

const BOOK: AddressBook = {
  addresses: [
    ...houses(
      'North Heron Street',
      'Pell Harbor',
      '00010',
      [-47.7, 36.4],
      ['1206', '1210', '1220', '12 1/2', '12'],
    ),
    ...houses('South Heron Street', 'Pell Harbor', '00012', [-47.7, 36.39], ['1211', '1214']),
    ...houses('Heron Street', 'Gullwick', '00024', [-47.5, 36.2], ['12', '14']),
    ...houses('Third Street', 'Pell Harbor', '00010', [-47.69, 36.4], ['3', '12']),
    ...houses('Larch Avenue', 'Pell Harbor', '00010', [-47.68, 36.4], ['218-09', '218-15', '300']),
    ...houses('Linnet Highway', 'Gullwick', '00024', [-47.55, 36.2], ['1210']),
    ...houses('Plover Court', 'Pell Harbor', '00010', [-47.66, 36.4], ['7']),
    ...houses('Plover Court', 'Gullwick', '00024', [-47.52, 36.2], ['7']),
  ],
  streets: [{ name: 'Sedge Lane', city: 'Gullwick', at: [-47.51, 36.21] }],
  corners: [
    {
      first: 'North Heron Street',
      second: 'Third Street',
      city: 'Pell Harbor',
      at: [-47.69, 36.4],
    },
  ],
  places: [
    { name: 'Pell Harbor', kind: 'town', city: '', at: [-47.7, 36.4] },
    {
      name: 'Sound Marina',
      kind: 'marina',
      city: 'Pell Harbor',
      street: 'Pell Road',
      at: [-47.7, 36.41],
    },
    { name: 'Gullwick Marina', kind: 'marina', city: 'Gullwick', at: [-47.5, 36.21] },
  ],
  routes: [{ number: '30', street: 'Linnet Highway' }],
};
const index = AddressIndex.of(BOOK);
const first = (text: string): string => {
  const found = index.suggest(text)[0];
  return found ? `${found.label} (${found.kind})` : 'nothing';
};

describe('what call takers type', () => {
  it.each([
    ['1210 n heron apt 4', '1210 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['1210 north heron street, pell harbor', '1210 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['1210 heron', '1210 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['heron 1210', '1210 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['heron 1210 00010', '1210 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['1210 hreon st pell hbr', '1210 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['1210 heron ph', '1210 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['12 heron gull', '12 Heron St, Gullwick 00024 (rooftop)'],
    ['12 heron 00024', '12 Heron St, Gullwick 00024 (rooftop)'],
    ['12 heron 0002', '12 Heron St, Gullwick 00024 (rooftop)'],
    ['12 1/2 n heron', '12 1/2 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['12½ n heron', '12 1/2 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['12 Heron & 3rd', '12 N Heron St, Pell Harbor 00010 (rooftop)'],
    ['99 heron and third', 'N Heron St & Third St, Pell Harbor (corner)'],
    ['corner of heron and 3rd', 'N Heron St & Third St, Pell Harbor (corner)'],
    ['third & heron', 'Third St & N Heron St, Pell Harbor (corner)'],
    ['12 3rd', '12 Third St, Pell Harbor 00010 (rooftop)'],
    ['12 third street', '12 Third St, Pell Harbor 00010 (rooftop)'],
    ['218-09 larch', '218-09 Larch Ave, Pell Harbor 00010 (rooftop)'],
    ['21809 larch', '218-09 Larch Ave, Pell Harbor 00010 (rooftop)'],
    ['218 09 larch', '218-09 Larch Ave, Pell Harbor 00010 (rooftop)'],
    ['218-11 larch', '218-11 Larch Ave, Pell Harbor 00010 (interpolated)'],
    ['1208 n heron', '1208 N Heron St, Pell Harbor 00010 (interpolated)'],
    ['1210 hwy 30', '1210 Linnet Hwy, Gullwick 00024 (rooftop)'],
    ['1210 route 30', '1210 Linnet Hwy, Gullwick 00024 (rooftop)'],
    ['hwy 30', 'Linnet Hwy, Gullwick (street)'],
    ['sedge ln', 'Sedge Ln, Gullwick (street)'],
    ['the marina on Pell', 'Sound Marina, Pell Harbor (place)'],
    ['marina in gullwick', 'Gullwick Marina, Gullwick (place)'],
    ['PO Box 12, 7 plover ct, gullwick', '7 Plover Ct, Gullwick 00024 (rooftop)'],
    ['po box 12', 'nothing'],
  ])('%p means %p', (text, answer) => expect(first(text)).toBe(answer));

  it('takes the apartment off, for the call and not for the point', () => {
    for (const text of [
      '1210 n heron apt 4b',
      'apt 4b, 1210 n heron',
      '1210 n heron #4b, pell harbor',
    ])
      expect(index.suggest(text)[0]).toMatchObject({
        label: '1210 N Heron St, Pell Harbor 00010',
        unit: expect.stringMatching(/^(Apt|Unit) 4B$/),
      });
  });

  it('puts no number between houses that are far apart, and says so', () =>
    expect(first('290 larch')).toBe('290 Larch Ave, Pell Harbor 00010 (street)'));

  it('lists both towns of one address, and accepts neither', () => {
    expect(
      index
        .suggest('7 plover ct')
        .map(({ city }) => city)
        .sort(),
    ).toEqual(['Gullwick', 'Pell Harbor']);
    expect(index.locate('7 plover ct')!.confidence).toBeLessThan(ACCEPT_CONFIDENCE);
    expect(index.locate('7 plover ct, gullwick')!.confidence).toBeGreaterThanOrEqual(
      ACCEPT_CONFIDENCE,
    );
  });

  it.each([
    '1210 s heron st, pell harbor',
    '1210 heron ave, pell harbor',
    '1210 n heron st, gullwick',
    '1210 n heron st, springfield',
    '1210 n heron st 00024',
    '1210 larch st, pell harbor',
  ])('leaves to a person what is contradicted: %p', (text) =>
    expect(index.locate(text)?.confidence ?? 0).toBeLessThan(ACCEPT_CONFIDENCE),
  );
});

/** A square of some three kilometres around a place. */
const shape = ([lon, lat]: At): [number, number][][][] => [
  [
    [
      [lon - 0.02, lat - 0.02],
      [lon + 0.02, lat - 0.02],
      [lon + 0.02, lat + 0.02],
      [lon - 0.02, lat + 0.02],
      [lon - 0.02, lat - 0.02],
    ],
  ],
];
const GULLWICK: At = [-47.52, 36.2];
const PELL: At = [-47.66, 36.4];

describe('near the outage areas', () => {
  it.each([
    ['Gullwick', GULLWICK],
    ['Pell Harbor', PELL],
  ])('equals come first that lie inside them: %s', (city, at) => {
    const near = nearAreas([shape(at)]);
    expect(index.suggest('7 plover', { near })[0]?.city).toBe(city);
    expect(index.suggest('7 plo', { near })[0]?.city).toBe(city);
  });

  it('a better match comes first wherever it is', () => {
    const near = nearAreas([shape(GULLWICK)]);
    expect(index.suggest('12 n heron st', { near })[0]?.city).toBe('Pell Harbor');
    expect(index.suggest('7 plover ct, pell harbor', { near })[0]?.city).toBe('Pell Harbor');
  });

  it('the nearer of two that lie outside comes first', () => {
    const near = nearAreas([shape([-47.45, 36.2])]);
    expect(index.suggest('7 plover ct', { near })[0]?.city).toBe('Gullwick');
  });
});

describe('house numbers along a line of the extract', () => {
  const at = (id: number, lon: number, lat: number, tags: Record<string, string> = {}) => ({
    id,
    lon,
    lat,
    tags,
  });
  const pbf = (kind: string, tags: Record<string, string> = {}) =>
    writeOsmPbf(
      {
        nodes: [
          at(1, -47.7, 36.4, { 'addr:housenumber': '200' }),
          at(2, -47.698, 36.4),
          at(3, -47.698, 36.402, { 'addr:housenumber': '400' }),
          at(4, -47.6, 36.3, { place: 'town', name: 'Gullwick' }),
          at(5, -47.71, 36.4),
        ],
        ways: [
          {
            id: 1,
            refs: [1, 2, 3],
            tags: { 'addr:interpolation': kind, 'addr:street': 'Sedge Lane', ...tags },
          },
          {
            id: 2,
            refs: [5, 1],
            tags: { highway: 'residential', name: 'Sedge Lane', ref: 'GC 7' },
          },
        ],
        relations: [],
      },
      'test',
    );
  const find = async (kind: string, text: string) => {
    const extract = await readExtract(pbf(kind));
    return AddressIndex.of(bookOf(extract, ownAddresses(extract))).suggest(text)[0];
  };

  it('follow its bend', async () => {
    // 300 is half of the way: the second leg is a little longer than the first, since a degree of longitude is shorter.
    const found = await find('even', '300 sedge ln');
    expect(found).toMatchObject({ kind: 'interpolated', city: 'Gullwick', lon: -47.698 });
    expect(found!.lat).toBeGreaterThan(36.4);
    expect(found!.lat).toBeLessThan(36.4005);
  });

  it('are known at its ends', async () =>
    expect(await find('even', '400 sedge ln')).toMatchObject({ kind: 'rooftop', lat: 36.402 }));

  it('lie on one side, unless the line counts every number', async () => {
    expect(await find('even', '301 sedge ln')).toMatchObject({ kind: 'street' });
    expect(await find('all', '301 sedge ln')).toMatchObject({ kind: 'interpolated' });
  });

  it('are not made up from a line that counts by letters', async () =>
    expect(await find('alphabetic', '300 sedge ln')).toMatchObject({ kind: 'street' }));

  it('leave the road findable by its number', async () =>
    expect(await find('even', 'route 7')).toMatchObject({ label: 'Sedge Ln, Gullwick' }));
});

describe('the address file', () => {
  const folder = temporaryFolder();
  afterAll(() => folder.remove());

  it('gives back what was written', async () => {
    const range = {
      street: 'Sedge Lane',
      city: 'Gullwick',
      postcode: '00024',
      from: '2',
      to: '40',
      step: 2 as const,
      line: [GULLWICK, PELL],
    };
    await writeAddressBook(folder.path, { ...BOOK, ranges: [range] });
    const book = await readAddressBook(folder.path);
    const sorted = (list: readonly unknown[]): string[] =>
      list.map((one) => JSON.stringify(one, Object.keys(one as object).sort())).sort();
    expect(sorted(book.addresses)).toEqual(
      sorted(BOOK.addresses.map((a) => ({ ...a, at: a.at.map((d) => Math.round(d * 1e7) / 1e7) }))),
    );
    expect(book.ranges).toEqual([range]);
    expect(book.routes).toEqual(BOOK.routes);
    expect(book.corners).toEqual(BOOK.corners);
    expect(book.places.map(({ name }) => name)).toEqual(BOOK.places.map(({ name }) => name));
  });

  it.each([0, 5, 11, 200, -9])('that is cut at %d bytes is refused in words', async (length) => {
    await writeAddressBook(folder.path, BOOK);
    const path = join(folder.path, 'addresses.bin');
    const whole = readFileSync(path);
    writeFileSync(path, whole.subarray(0, length < 0 ? whole.length + length : length));
    await expect(readAddressTable(folder.path)).rejects.toThrow(/address file/i);
  });
});

describe('suggestions of the server', () => {
  let server: TestServer;
  beforeAll(async () => {
    server = await startServer({
      suffix: '_addresses',
      context: {
        region: {
          ...TEST_REGION,
          suggest: (text, areas) =>
            index
              .suggest(text, { near: areas })
              .map(({ label, unit, lon, lat, kind, confidence }): AddressSuggestion => ({
                label,
                unitNo: unit ?? '',
                lonLat: [lon, lat],
                kind,
                confidence,
              })),
        },
      },
    });
  });
  afterAll(() => server.close());

  it('put the open storm’s areas first, as they are drawn, moved and removed', async () => {
    const mara = await server.signIn('dispatcher');
    const town = async (): Promise<string | undefined> => {
      const { body } = await mara.call('suggestAddresses', { query: { text: '7 plover ct' } });
      return (body as { suggestions: AddressSuggestion[] }).suggestions[0]?.label;
    };
    const areaId = randomUUID();
    const draw = (at: At) =>
      mara.call('drawArea', {
        params: { stormId: server.stormId },
        body: {
          commandId: randomUUID(),
          areaId,
          name: 'Heron 2',
          shape: shape(at),
          outAt: NIGHT - 3_600_000,
          backAt: null,
        },
      });
    expect((await draw(PELL)).status).toBe(201);
    expect(await town()).toBe('7 Plover Ct, Pell Harbor 00010');
    const moved = await mara.call('changeArea', {
      params: { areaId },
      body: { commandId: randomUUID(), version: 0, shape: shape(GULLWICK) },
    });
    expect(moved.status).toBe(200);
    expect(await town()).toBe('7 Plover Ct, Gullwick 00024');
  });
});
