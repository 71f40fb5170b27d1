import { randomUUID } from 'node:crypto';
import { ACCEPT_CONFIDENCE } from '../../shared/domain/address/address-suggestion';
import type { AddressSuggestion } from '../../shared/contract/calls';
import { AddressIndex } from '../../server/region/address-index';
import type { AddressBook } from '../../server/region/address-points';
import { nearAreas } from '../../server/region/nearness';
import { TEST_REGION } from '../support/region';
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
    '1210 heron st, pell harbor',
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

describe('suggestions of the server', () => {
  let server: TestServer;
  beforeAll(async () => {
    server = await startServer({
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
