/** @jest-environment node */
import { HOUR_MS } from '@shared/domain/instant';
import { crossesItself, isInShape } from '@shared/domain/outage-shape';
import { readGeoJson } from './geojson-areas';

const NOW = Date.UTC(2026, 9, 3, 12);
const square = (west: number, south: number, size: number): number[][] => [
  [west, south],
  [west + size, south],
  [west + size, south + size],
  [west, south + size],
  [west, south],
];
const feature = (coordinates: unknown, properties: object = {}, type = 'Polygon') => ({
  type: 'Feature',
  properties,
  geometry: { type, coordinates },
});
const collection = (...features: object[]) => ({ type: 'FeatureCollection', features });
const read = (file: unknown) =>
  readGeoJson(
    typeof file === 'string' ? file : JSON.stringify(file),
    'north side.geojson',
    NOW,
    'UTC',
  );
const areasOf = (file: unknown) => {
  const reading = read(file);
  if (reading.kind !== 'areas') throw new Error(reading.why);
  return reading;
};

describe('readGeoJson', () => {
  it('reads parts, holes, names and times', () => {
    const { areas, skipped } = areasOf(
      collection(
        feature([square(0, 0, 10), square(3, 3, 4)], {
          Name: '  Heron   2 ',
          out_at: '2026-10-03T02:00:00-04:00',
          restored: Date.UTC(2026, 9, 3, 9),
        }),
        feature(
          [[square(0, 0, 1)], [square(5, 5, 1)]],
          { start: '2026-10-03 05:30' },
          'MultiPolygon',
        ),
        { type: 'Feature', properties: null, geometry: { type: 'Point', coordinates: [0, 0] } },
      ),
    );
    expect(areas[0]).toMatchObject({
      name: 'Heron 2',
      outAt: NOW - 6 * HOUR_MS,
      backAt: NOW - 3 * HOUR_MS,
    });
    expect(isInShape([5, 5], areas[0]!.shape)).toBe(false);
    expect(areas[1]).toMatchObject({
      name: 'north side 2',
      outAt: NOW - 6.5 * HOUR_MS,
      backAt: null,
    });
    expect(areas[1]!.shape).toHaveLength(2);
    expect(skipped).toEqual(['1 feature is a point or a line']);
  });

  it('takes a feature or a polygon by itself, with heights and open rings', () => {
    const open = square(0, 0, 1)
      .slice(0, -1)
      .map((point) => [...point, 12.5]);
    expect(areasOf(feature([open])).areas[0]!.shape).toEqual([[square(0, 0, 1)]]);
    expect(areasOf({ type: 'Polygon', coordinates: [square(0, 0, 1)] }).areas).toHaveLength(1);
  });

  it('reads a time without a zone on the region’s own clock', () => {
    const file = feature([square(0, 0, 1)], { outAt: '2026-10-03T02:00' });
    const reading = readGeoJson(JSON.stringify(file), 'x', NOW, 'America/New_York');
    expect(reading).toMatchObject({ areas: [{ outAt: Date.UTC(2026, 9, 3, 6) }] });
  });

  it('relies on no time that it cannot be sure of, and says so', () => {
    const of = (properties: object) => areasOf(feature([square(0, 0, 1)], properties)).areas[0];
    expect(of({ outAt: 'last night' })).toMatchObject({
      outAt: null,
      notes: ['when the power went could not be read: "last night"'],
    });
    expect(of({ backAt: '2026-10-04T00:00Z' })?.notes).toEqual([
      'when it came back is still to come and is left out: "2026-10-04T00:00Z"',
    ]);
    expect(of({ outAt: '2026-10-03T09:00Z', backAt: '2026-10-03T08:00Z' })).toMatchObject({
      outAt: null,
      backAt: null,
    });
  });

  it.each([
    ['no JSON', '{"type": "Feature', /no JSON/],
    ['no GeoJSON', [1, 2], /no GeoJSON/],
    [
      'lines only',
      collection(feature([[0, 0]], {}, 'LineString')),
      /1 feature is a point or a line/,
    ],
    ['nothing in it', collection(), /no features/],
    ['a topology', { type: 'Topology' }, /a Topology/],
    [
      'metres',
      collection(feature([square(500_000, 4_000_000, 10)])),
      /not degrees of longitude and latitude/,
    ],
    [
      'another reference system',
      { ...collection(feature([square(0, 0, 1)])), crs: { properties: { name: 'EPSG:32118' } } },
      /another reference system/,
    ],
    ['too few corners', feature([square(0, 0, 1).slice(0, 2)]), /fewer than three corners/],
    ['text for numbers', feature([[['0', '1']]]), /no pair of numbers/],
    [
      'a bow',
      feature([
        [
          [0, 0],
          [1, 1],
          [1, 0],
          [0, 1],
          [0, 0],
        ],
      ]),
      /crosses itself/,
    ],
    [
      'too many areas',
      collection(...Array.from({ length: 101 }, () => feature([square(0, 0, 1)]))),
      /101 areas/,
    ],
  ])('refuses %s in clear words', (_, file, why) => {
    const reading = read(file);
    expect(reading).toMatchObject({ kind: 'unreadable' });
    expect((reading as { why: string }).why).toMatch(why);
  });

  it('thins an outline of too many points and says by how much', () => {
    const ring = Array.from({ length: 9001 }, (_, i) => {
      const angle = (2 * Math.PI * (i % 9000)) / 9000;
      return [Math.cos(angle) / 10, Math.sin(angle) / 10];
    });
    const [area] = areasOf(feature([ring])).areas;
    expect(area!.shape[0]![0]!.length).toBeLessThan(4000);
    expect(area!.notes[0]).toMatch(/^9001 points thinned to \d+, true to 2 m$/);
    expect(area!.shape.some((rings) => crossesItself(rings))).toBe(false);
    expect(isInShape([0.0999, 0], area!.shape)).toBe(true);
  });
});
