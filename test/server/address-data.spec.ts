import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { AddressIndex } from '../../server/region/address-index';
import { bookOf, ownAddresses, type AddressBook } from '../../server/region/address-points';
import { readAddressTable } from '../../server/region/address-store';
import { readExtract } from '../../server/region/osm-extract';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';
import { readAddressBook, writeAddressBook } from '../../server/region/region-data';
import { temporaryFolder } from '../support/region-files';

const BOOK: AddressBook = {
  addresses: [
    {
      number: '12 1/2',
      street: 'Heron Street',
      city: 'Gullwick',
      postcode: '00024',
      flats: 4,
      at: [-47.5, 36.2],
    },
    {
      number: '218-09',
      street: 'Larch Avenue',
      city: 'Pell Harbor',
      postcode: '',
      flats: 1,
      at: [-47.68, 36.4],
    },
  ],
  streets: [{ name: 'Sedge Lane', city: 'Gullwick', at: [-47.51, 36.21] }],
  corners: [{ first: 'Heron Street', second: 'Sedge Lane', city: 'Gullwick', at: [-47.5, 36.21] }],
  places: [
    {
      name: 'Gullwick Marina',
      kind: 'marina',
      city: 'Gullwick',
      street: 'Heron Street',
      at: [-47.5, 36.21],
    },
  ],
  routes: [{ number: '30', street: 'Sedge Lane' }],
  ranges: [
    {
      street: 'Sedge Lane',
      city: 'Gullwick',
      postcode: '00024',
      from: '2',
      to: '40',
      step: 2,
      line: [
        [-47.52, 36.2],
        [-47.5, 36.21],
      ],
    },
  ],
};

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
    await writeAddressBook(folder.path, BOOK);
    const { streets, ...rest } = await readAddressBook(folder.path);
    const { streets: _, ...written } = BOOK;
    expect(rest).toEqual(written);
    // Streets that only have houses are streets as well.
    expect(streets.map(({ name }) => name).sort()).toEqual([
      'Heron Street',
      'Larch Avenue',
      'Sedge Lane',
    ]);
  });

  it.each([0, 5, 11, 200, -9])('that is cut at %d bytes is refused in words', async (length) => {
    await writeAddressBook(folder.path, BOOK);
    const path = join(folder.path, 'addresses.bin');
    const whole = readFileSync(path);
    writeFileSync(path, whole.subarray(0, length < 0 ? whole.length + length : length));
    await expect(readAddressTable(folder.path)).rejects.toThrow(/address file/i);
  });
});
