import { readdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { AddressBook } from '../../server/region/address-points';
import { importRegion } from '../../server/region/import-region';
import { readAddressBook, readReport, type RegionReport } from '../../server/region/region-data';
import { hamletPbf } from '../support/hamlet';
import { temporaryFolder } from '../support/region-files';

const folder = temporaryFolder();
afterAll(() => folder.remove());
let files = 0;

async function importWith(
  content: string | Buffer,
): Promise<{ book: AddressBook; report: RegionReport; attribution: string }> {
  const path = join(folder.path, `addresses-${String(files++)}`);
  writeFileSync(path, content);
  const { folder: made, manifest } = await importRegion({
    pbf: hamletPbf(),
    outFolder: join(folder.path, 'regions'),
    name: 'Sedge Corner',
    timeZone: 'UTC',
    attribution: 'invented',
    addressFile: { path, attribution: 'Addresses of an invented county' },
  });
  const report = await readReport(made);
  if (!report) throw new Error('no report');
  return { book: await readAddressBook(made), report, attribution: manifest.attribution };
}

const HEADER = 'LON,LAT,NUMBER,STREET,UNIT,CITY,DISTRICT,REGION,POSTCODE,ID,HASH';
const rowOf = (lon: number, lat: number, number: string, street: string, rest = ',,,,,,'): string =>
  `${String(lon)},${String(lat)},${number},${street}${rest}`;
/** Sorted: in which order a book keeps its addresses is its own affair. */
const doors = (book: AddressBook): string[] =>
  book.addresses.map(({ number, street, city }) => `${number} ${street}, ${city}`).sort();

describe('an address file', () => {
  it('adds what the extract lacks and keeps what it has', async () => {
    const { book, report, attribution } = await importWith(
      [
        HEADER,
        // Five metres from the extract's own point, written otherwise.
        rowOf(-47.69605, 36.4002, '12', 'LARCH LN'),
        rowOf(-47.692, 36.4003, '20', 'LARCH LN', ',,SEDGE CORNER,,,00017,a,b'),
      ].join('\n'),
    );
    expect(doors(book)).toEqual([
      '12 Larch Lane, Sedge Corner',
      '14 Larch Lane, Sedge Corner',
      // Spelled as the street is in the extract.
      '20 Larch Lane, Sedge Corner',
      '3 Heron Street, Upper Sedge',
    ]);
    expect(book.addresses.find(({ number }) => number === '12')?.at).toEqual([-47.696, 36.4002]);
    expect(report.addressFile).toMatchObject({ rows: 2, added: 1, merged: 1, rejectedCount: 0 });
    expect(attribution).toBe('invented; Addresses of an invented county');
  });

  it('keeps two houses of one number apart when they are farther than 30 m', async () => {
    const { book } = await importWith(
      [
        HEADER,
        // 36.4002 to 36.4005 is 33 m; to 36.4004 is 22 m.
        rowOf(-47.696, 36.4005, '12', 'Larch Lane'),
        rowOf(-47.6965, 36.4004, '14', 'Larch Lane'),
      ].join('\n'),
    );
    expect(book.addresses.filter(({ number }) => number === '12').length).toBe(2);
    expect(book.addresses.filter(({ number }) => number === '14').length).toBe(1);
  });

  it('folds flats into their building, which counts each once', async () => {
    const units = ['1', '2', '2', '3'].map((unit) =>
      rowOf(-47.692, 36.4003, '30', 'Larch Lane', `,${unit},,,,,,`),
    );
    const { book, report } = await importWith([HEADER, ...units].join('\n'));
    expect(book.addresses.find(({ number }) => number === '30')).toMatchObject({ flats: 3 });
    expect(report.addressFile).toMatchObject({ added: 1, merged: 3, unitRows: 4 });
  });

  it('fills in a missing town by postcode, by boundary, by the nearest place', async () => {
    const { book, report } = await importWith(
      [
        HEADER,
        // Nearest to Upper Sedge, but with Sedge Corner's postcode.
        rowOf(-47.694, 36.4036, '40', 'Heron Street', ',,,,,00017,,'),
        // Within Rushmere's boundary, though Sedge Corner is the nearest place.
        rowOf(-47.699, 36.4, '2', 'Larch Lane'),
        rowOf(-47.694, 36.4034, '5', 'Heron Street'),
      ].join('\n'),
    );
    expect(doors(book)).toEqual(
      expect.arrayContaining([
        '40 Heron Street, Sedge Corner',
        '2 Larch Lane, Rushmere',
        '5 Heron Street, Upper Sedge',
      ]),
    );
    expect(report.addressFile?.citiesFilled).toBe(3);
  });

  it('says which rows it rejects, with their lines and why', async () => {
    const { report } = await importWith(
      [
        HEADER,
        rowOf(-47.692, 36.4003, '20', 'Larch Lane'),
        rowOf(-47.692, 36.4003, '', 'Larch Lane'),
        rowOf(-47.692, 36.4003, '0', 'Larch Lane'),
        rowOf(-47.692, 36.4003, '22', ''),
        ',,24,Larch Lane,,,,,,,',
        rowOf(0, 0, '26', 'Larch Lane'),
        rowOf(-40, 36.4, '28', 'Larch Lane'),
        rowOf(1_053_412, 201_233, '30', 'Larch Lane'),
        rowOf(-47.692, 36.4003, '32', 'PO Box 7'),
      ].join('\n'),
    );
    expect(report.addressFile?.rejected).toEqual([
      { line: 3, reason: 'it has no house number' },
      { line: 4, reason: 'it has no house number' },
      { line: 5, reason: 'it has no street' },
      { line: 6, reason: 'it has no coordinates' },
      { line: 7, reason: 'its coordinates are both zero' },
      { line: 8, reason: 'it lies outside of the extract' },
      { line: 9, reason: 'its coordinates are no degrees' },
      { line: 10, reason: 'it is a post office box' },
    ]);
    expect(report.addressFile?.reasons['it has no house number']).toBe(2);
    expect(report.leftOut).toEqual([
      { what: 'House numbers', count: 1, why: 'they name no street' },
      {
        what: 'Ends of roads',
        count: 1,
        why: 'the extract was cut there and lacks their points',
      },
    ]);
  });

  it.each<[string, string]>([
    ['semicolons', 'longitude;latitude;HOUSENUM;FULLNAME\n-47.692;36.4003;20;Larch Lane'],
    ['tabs', 'x\ty\tADDR_NUM\tST_NAME\n-47.692\t36.4003\t20\tLarch Lane'],
    ['a byte order mark', '\uFEFFlon,lat,number,street\n-47.692,36.4003,20,Larch Lane'],
    [
      'quotes and line ends of another system',
      'LON,LAT,"NUMBER",STREET\r\n-47.692,36.4003,"20","Larch Lane"\r\n',
    ],
    [
      'a street in parts',
      'LON,LAT,ADD_NUMBER,ST_PREDIR,ST_NAME,ST_POSTYP,POST_COMM\n-47.692,36.4003,20,,LARCH,LANE,SEDGE CORNER',
    ],
    ['one line for all', 'LON,LAT,FULLADDR\n-47.692,36.4003,"20 Larch Lane, Sedge Corner"'],
    ['tags', 'lon,lat,addr:housenumber,addr:street\n-47.692,36.4003,20,Larch Lane'],
    [
      'features one to a line',
      '{"type":"Feature","properties":{"hash":"a","number":"20","street":"Larch Lane","unit":null},"geometry":{"type":"Point","coordinates":[-47.692,36.4003]}}\n',
    ],
    [
      'a collection with all on one line',
      '{"type":"FeatureCollection","crs":{"type":"name","properties":{"name":"urn:ogc:def:crs:OGC:1.3:CRS84"}},"features":[{"type":"Feature","properties":{"NUMBER":20,"STREET":"Larch Lane"},"geometry":{"type":"Point","coordinates":[-47.692,36.4003,2]}}]}',
    ],
  ])('reads %s', async (_what, content) => {
    const { book } = await importWith(content);
    expect(book.addresses.slice(3)).toMatchObject([
      {
        number: '20',
        street: expect.stringMatching(/^Larch (Lane|Ln)$/),
        at: [-47.692, 36.4003],
        city: 'Sedge Corner',
      },
    ]);
  });

  it('finds the line of a feature that is no address', async () => {
    const feature = (geometry: string): string =>
      `{"type":"Feature","properties":{"number":"20","street":"Larch {Lane}"},\n"geometry":${geometry}}`;
    const { report } = await importWith(
      `{"type":"FeatureCollection","features":[\n${feature('{"type":"Point","coordinates":[-47.692,36.4003]}')},\n${feature('{"type":"Polygon","coordinates":[]}')},\n${feature('null')}]}`,
    );
    expect(report.addressFile).toMatchObject({ rows: 3, added: 1 });
    expect(report.addressFile?.rejected).toEqual([
      { line: 4, reason: 'its shape is Polygon, not a point' },
      { line: 6, reason: 'it has no coordinates' },
    ]);
  });

  it.each<[string, string | Buffer, RegExp]>([
    ['nothing', '', /address file is empty/],
    ['a header alone', HEADER, /holds no rows/],
    ['no street column', 'LON,LAT,NUMBER\n1,2,3', /no column for the street.*Its columns are: LON/],
    ['a list', '[{"a":1}]', /neither CSV nor GeoJSON/],
    ['markup', '<kml></kml>', /neither CSV nor GeoJSON/],
    ['something packed', Buffer.from([0x50, 0x4b, 3, 4, 0, 0xff, 0xfe, 0x80]), /UTF-8.*unpack/],
    [
      'feet',
      `${HEADER}\n${rowOf(1_053_412, 201_233, '30', 'Larch Lane')}`,
      /no degrees.*ogr2ogr -t_srs EPSG:4326/,
    ],
    [
      'another system',
      '{"type":"FeatureCollection","crs":{"type":"name","properties":{"name":"urn:ogc:def:crs:EPSG::2263"}},"features":[]}',
      /EPSG::2263.*ogr2ogr/,
    ],
    [
      'another county',
      `${HEADER}\n${rowOf(-40, 36, '30', 'Larch Lane')}`,
      /No row.*outside of the extract.*same county/,
    ],
    [
      'a file that ends half-way',
      '{"type":"FeatureCollection","features":[{"type":"Feature","properties":{"nu',
      /ends in the middle of line 1/,
    ],
  ])('refuses %s with a sentence that helps', async (_what, content, words) => {
    await expect(importWith(content)).rejects.toThrow(words);
  });

  it('leaves no workshop behind', () =>
    expect(
      readdirSync(join(folder.path, 'regions')).filter((name) => name.startsWith('.')),
    ).toEqual([]));
});
