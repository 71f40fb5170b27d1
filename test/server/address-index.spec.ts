import { join } from 'node:path';
import { ACCEPT_CONFIDENCE } from '../../shared/domain/address/address-suggestion';
import { AddressIndex } from '../../server/region/address-index';
import {
  bookOf,
  ownAddresses,
  type AddressBook,
  type AddressPoint,
} from '../../server/region/address-points';
import { chanceOf } from '../../server/region/county/chance';
import { readExtract } from '../../server/region/osm-extract';
import { demoCountyPbf } from '../support/demo-county';
import { disturbedAddresses } from '../support/disturbed-addresses';
import { measureAccepted, measureHits } from '../support/hit-rates';

/** Not among the seeds on which the matcher was set. */
const SEED = 20_261_201;
const COUNT = 1_000;
const chance = chanceOf(17, 'address-test');

async function bookIn(pbf: string | Uint8Array): Promise<AddressBook> {
  const extract = await readExtract(pbf);
  return bookOf(extract, ownAddresses(extract));
}

/** What every region must reach. */
function itFindsDisturbedAddresses(
  region: string,
  book: () => AddressBook,
  index: () => AddressIndex,
): void {
  it('finds what is said badly: 97 % first, 99.5 % among five', () => {
    const set = disturbedAddresses(book(), { seed: SEED, count: COUNT });
    const rates = measureHits(index(), set);
    process.stdout.write(`${JSON.stringify({ region, ...rates })}\n`);
    expect(rates.count).toBe(COUNT);
    expect(rates.first).toBeGreaterThanOrEqual(0.97);
    expect(rates.amongFive).toBeGreaterThanOrEqual(0.995);
  });

  it('accepts by itself what is right, and nothing that fits two houses', () => {
    const set = disturbedAddresses(book(), { seed: SEED + 1, count: COUNT });
    const clear = measureAccepted(index(), set.clear);
    process.stdout.write(`${JSON.stringify({ region, ...clear })}\n`);
    expect(clear.accepted).toBeGreaterThan(COUNT / 2);
    expect(clear.wrong.length).toBeLessThanOrEqual(COUNT * 0.002);
    expect(measureAccepted(index(), set.open).wrong.length).toBeLessThanOrEqual(1);
  });

  it('hardly ever accepts another house for one that the book lacks', () => {
    const isGone = (street: string, city: string): boolean =>
      chanceOf(3, `${street}|${city}`).happens(0.05);
    const all = book();
    const known: AddressBook = {
      ...all,
      addresses: all.addresses.filter((a, i) => i % 10 !== 3 && !isGone(a.street, a.city)),
      streets: all.streets.filter(({ name, city }) => !isGone(name, city)),
      corners: all.corners.filter(
        ({ first, second, city }) => !isGone(first, city) && !isGone(second, city),
      ),
    };
    const lacking = all.addresses.filter((a, i) => i % 10 === 3 || isGone(a.street, a.city));
    const { clear } = disturbedAddresses(
      { ...all, addresses: lacking },
      { seed: SEED + 2, count: COUNT },
    );
    const { accepted, wrong } = measureAccepted(AddressIndex.of(known), clear, 150);
    process.stdout.write(
      `${JSON.stringify({ region, lacking: clear.length, accepted, fartherThan150m: wrong })}\n`,
    );
    expect(wrong.length).toBeLessThanOrEqual(COUNT * 0.005);
  });

  it('accepts no street that does not exist', () => {
    const towns = index().cities;
    const syllables = 'blor vex zu quim fra dob wint gork shel pran tugg mosk'.split(' ');
    const made = Array.from({ length: 500 }, () => {
      const name = `${chance.pick(syllables)}${chance.pick(syllables)}${chance.pick(['', 'ley', 'ton'])}`;
      return `${String(1 + chance.below(1500))} ${name} ${chance.pick(['St', 'Ave', 'Rd', 'Ln'])}, ${chance.pick(towns)}`;
    });
    const accepted = made.filter(
      (text) => (index().locate(text)?.confidence ?? 0) >= ACCEPT_CONFIDENCE,
    );
    expect(accepted).toEqual([]);
  });
}

describe('AddressIndex on the demo county', () => {
  let book: AddressBook;
  let index: AddressIndex;
  beforeAll(async () => {
    book = await bookIn(demoCountyPbf());
    index = AddressIndex.of(book);
  });

  itFindsDisturbedAddresses(
    'demo county',
    () => book,
    () => index,
  );

  const isAt = (point: AddressPoint, found: { lon: number; lat: number } | undefined): boolean =>
    found?.lon === point.at[0] && found.lat === point.at[1];
  const samples = (count: number): AddressPoint[] =>
    Array.from({ length: count }, () => chance.pick(book.addresses));

  it('offers the house before its street is typed to the end', () => {
    const shares = [2, 4, 6].map((letters) => {
      const points = samples(150).filter(({ street }) => nameStart(street) > 0);
      const found = points.filter((point) => {
        const typed = point.street.slice(0, nameStart(point.street) + letters);
        const near = { metresTo: (at: readonly [number, number]) => far(at, point.at) };
        return index
          .suggest(`${point.number} ${typed}`, { near })
          .some((answer) => isAt(point, answer));
      });
      return found.length / points.length;
    });
    process.stdout.write(
      `${JSON.stringify({ foundByLettersOfName: { 2: shares[0], 4: shares[1], 6: shares[2] } })}\n`,
    );
    expect(shares[0]).toBeGreaterThan(0.8);
    expect(shares[1]).toBeGreaterThan(0.95);
    expect(shares[2]).toBeGreaterThan(0.97);
  });

  it('has something sensible at every key', () => {
    for (const point of samples(25)) {
      const whole = `${point.number} ${point.street}, ${point.city}`;
      const from = whole.indexOf(' ') + 3;
      for (let end = from; end <= whole.length; end++) {
        const typed = whole.slice(0, end);
        expect([typed, index.suggest(typed).length > 0]).toEqual([typed, true]);
      }
    }
  });

  it('puts a missing house between its neighbours, and says so', () => {
    const point = book.addresses.find(
      (a) =>
        index.suggest(`${Number(a.number) + 2} ${a.street}, ${a.city}`)[0]?.kind === 'interpolated',
    )!;
    const found = index.suggest(`${Number(point.number) + 2} ${point.street}, ${point.city}`)[0]!;
    expect(found.number).toBe(String(Number(point.number) + 2));
    expect(far([found.lon, found.lat], point.at)).toBeLessThan(150);
  });

  it('finds corners by their two streets, in either order and in short', () => {
    const corners = Array.from({ length: 200 }, () => chance.pick(book.corners));
    const missed = corners.filter(({ first, second, city }) => {
      const texts = [
        `${first} & ${second}, ${city}`,
        `corner of ${second} and ${first}, ${city.toLowerCase()}`,
      ];
      return !texts.every((text) => {
        const found = index.suggest(text)[0];
        return found?.kind === 'corner' && found.city === city;
      });
    });
    expect(missed.length).toBeLessThanOrEqual(2);
  });

  it('finds places by name, by kind and by where they are', () => {
    const marina = book.places.find(({ kind }) => kind === 'marina')!;
    const clinic = book.places.find(({ kind }) => kind === 'clinic')!;
    for (const text of [marina.name, `the marina in ${marina.city}`, `${marina.city} marina`])
      expect(index.suggest(text)[0]).toMatchObject({ kind: 'place', street: marina.name });
    expect(index.suggest(`the clinic at ${clinic.city}`)[0]).toMatchObject({ street: clinic.name });
    expect(index.suggest('gullwick')[0]).toMatchObject({ kind: 'place', label: 'Gullwick' });
  });

  it('names a pin by the house beside it, and leaves it where it was set', () => {
    const [point] = samples(1);
    const [lon, lat] = [point!.at[0] + 0.00005, point!.at[1]];
    expect(index.nearest(lon, lat)).toMatchObject({ kind: 'pin', lon, lat, city: point!.city });
    expect(index.nearest(-47.36, 36.2)).toMatchObject({
      kind: 'pin',
      number: null,
      label: 'Pin at 36.20000, -47.36000',
    });
  });

  it.each(['', '   ', '1210', 'PO Box 12', 'zzzzqqqq', ',,,', '&'])(
    'has nothing to offer for %p',
    (text) => {
      expect(index.suggest(text)).toEqual([]);
      expect(index.locate(text)).toBeNull();
    },
  );
});

const nameStart = (street: string): number =>
  street.search(/(?<=^(?:North|South|East|West) |^)[A-Z](?!orth |outh |ast |est )/);
const far = (a: readonly [number, number], b: readonly [number, number]): number =>
  Math.hypot((a[0] - b[0]) * 89_701, (a[1] - b[1]) * 110_972);

const data = process.env['THAWLINE_TEST_DATA'];
(data ? describe : describe.skip)(
  'AddressIndex on Queens Village (needs THAWLINE_TEST_DATA)',
  () => {
    let book: AddressBook;
    let index: AddressIndex;
    beforeAll(async () => {
      book = await bookIn(join(data ?? '', 'osm', 'queens-village.osm.pbf'));
      index = AddressIndex.of(book);
    });
    itFindsDisturbedAddresses(
      'Queens Village',
      () => book,
      () => index,
    );
  },
);
