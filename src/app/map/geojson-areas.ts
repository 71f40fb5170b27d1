import type { AreaShape } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';
import type { Instant } from '@shared/domain/instant';
import { crossesItself, MOST_SHAPE_POINTS } from '@shared/domain/outage-shape';
import { thinned } from '@shared/domain/thin-line';
import { timesIn } from './geojson-times';

/** A file beyond this is no list of outage areas. */
export const MOST_FILE_BYTES = 5_000_000;
export const MOST_AREAS = 100;
const MOST_NAME = 80;

/** An outage area as a file tells of it. What the file does not say is `null`. */
export interface FileArea {
  readonly name: string;
  readonly shape: AreaShape;
  readonly outAt: Instant | null;
  readonly backAt: Instant | null;
  /** What was changed or left out on the way, in words. */
  readonly notes: readonly string[];
}

export type FileReading =
  | {
      readonly kind: 'areas';
      readonly areas: readonly FileArea[];
      readonly skipped: readonly string[];
    }
  | { readonly kind: 'unreadable'; readonly why: string };

interface Json {
  readonly [key: string]: unknown;
}

const unreadable = (why: string): FileReading => ({ kind: 'unreadable', why });

/**
 * Reads outage areas from GeoJSON (RFC 7946): the polygons and multipolygons of a feature collection,
 * of one feature, or a geometry by itself. Names and times are taken from the properties.
 *
 * @param zone the region's time zone, for times that are written without one
 */
export function readGeoJson(
  text: string,
  fileName: string,
  now: Instant,
  zone: string,
): FileReading {
  let file: unknown;
  try {
    file = JSON.parse(text.replace(/^\uFEFF/, ''));
  } catch {
    return unreadable('This is no JSON. Was the file cut off, or is it another kind of file?');
  }
  if (!isObject(file) || typeof file['type'] !== 'string')
    return unreadable('This is JSON, but no GeoJSON: it has no "type".');
  if (!isDegrees(file['crs']))
    return unreadable(
      'Its coordinates are in another reference system. Save it in longitude and latitude (WGS 84).',
    );
  const features = featuresOf(file);
  if (!features) return unreadable(`It holds a ${file['type']}, and no features or polygons.`);
  const areas: FileArea[] = [];
  const skipped: string[] = [];
  let others = 0;
  for (const [i, feature] of features.entries()) {
    const called = nameOf(feature, `${fileName.replace(/\.[^.]+$/, '')} ${i + 1}`);
    const coordinates = polygonsOf(feature['geometry']);
    if (!coordinates) {
      others++;
      continue;
    }
    const read = shapeOf(coordinates);
    if (typeof read === 'string') skipped.push(`${called}: ${read}`);
    else {
      const { times, notes } = timesIn(propertiesOf(feature), now, zone);
      areas.push({ name: called, shape: read.shape, ...times, notes: [...read.notes, ...notes] });
    }
  }
  if (others > 0)
    skipped.push(
      others === 1 ? '1 feature is a point or a line' : `${others} features are points or lines`,
    );
  if (areas.length === 0)
    return unreadable(
      skipped.length > 0
        ? `No area in it can be used. ${skipped.slice(0, 3).join('. ')}.`
        : 'It holds no features.',
    );
  if (areas.length > MOST_AREAS)
    return unreadable(`It holds ${areas.length} areas; at most ${MOST_AREAS} are taken at once.`);
  return { kind: 'areas', areas, skipped };
}

const isObject = (one: unknown): one is Json =>
  typeof one === 'object' && one !== null && !Array.isArray(one);

/** RFC 7946 knows longitude and latitude only; older files name other systems. */
function isDegrees(crs: unknown): boolean {
  if (crs === undefined || crs === null) return true;
  return /CRS84|EPSG:{1,2}4326/i.test(JSON.stringify(crs));
}

function featuresOf(file: Json): Json[] | null {
  switch (file['type']) {
    case 'FeatureCollection':
      return Array.isArray(file['features']) ? file['features'].filter(isObject) : null;
    case 'Feature':
      return [file];
    case 'Polygon':
    case 'MultiPolygon':
      return [{ geometry: file }];
    default:
      return null;
  }
}

function polygonsOf(geometry: unknown): unknown[] | null {
  if (!isObject(geometry)) return null;
  const { type, coordinates } = geometry;
  if (type === 'Polygon') return [coordinates];
  return type === 'MultiPolygon' && Array.isArray(coordinates) ? coordinates : null;
}

const propertiesOf = (feature: Json): Json =>
  isObject(feature['properties']) ? feature['properties'] : {};

function nameOf(feature: Json, otherwise: string): string {
  const properties = propertiesOf(feature);
  for (const wanted of ['name', 'title', 'label', 'id']) {
    const [, value] =
      Object.entries(properties).find(([key]) => key.toLowerCase() === wanted) ?? [];
    const words = typeof value === 'number' ? String(value) : value;
    if (typeof words === 'string' && words.trim() !== '')
      return words.replace(/\s+/g, ' ').trim().slice(0, MOST_NAME);
  }
  return otherwise.slice(0, MOST_NAME);
}

/** @returns the shape, or why it cannot be one */
function shapeOf(
  polygons: readonly unknown[],
): { readonly shape: AreaShape; readonly notes: readonly string[] } | string {
  const shape: LonLat[][][] = [];
  for (const polygon of polygons) {
    if (!Array.isArray(polygon)) return 'a polygon without rings';
    const rings: LonLat[][] = [];
    for (const ring of polygon as unknown[]) {
      const read = ringOf(ring);
      if (typeof read === 'string') return read;
      rings.push(read);
    }
    if (rings.length > 0) shape.push(rings);
  }
  if (shape.length === 0) return 'a polygon without rings';
  if (shape.some((rings) => crossesItself(rings))) return 'its outline crosses itself';
  return fewEnough(shape);
}

function ringOf(ring: unknown): LonLat[] | string {
  if (!Array.isArray(ring)) return 'a ring without points';
  const points: LonLat[] = [];
  for (const point of ring as unknown[]) {
    const [lon, lat] = Array.isArray(point) ? (point as unknown[]) : [];
    if (typeof lon !== 'number' || typeof lat !== 'number' || !isFinite(lon) || !isFinite(lat))
      return 'a point that is no pair of numbers';
    if (Math.abs(lon) > 180 || Math.abs(lat) > 90)
      return 'its coordinates are not degrees of longitude and latitude';
    const last = points.at(-1);
    const place: LonLat = [rounded(lon), rounded(lat)];
    if (last?.[0] !== place[0] || last[1] !== place[1]) points.push(place);
  }
  const [first] = points;
  const last = points.at(-1);
  if (first && last && (first[0] !== last[0] || first[1] !== last[1])) points.push([...first]);
  return points.length >= 4 ? points : 'a ring of fewer than three corners';
}

/** A millionth of a degree is a hand's breadth. */
const rounded = (degrees: number): number => Math.round(degrees * 1e6) / 1e6;

const pointsIn = (shape: AreaShape): number =>
  shape.flat().reduce((sum, ring) => sum + ring.length, 0);

function fewEnough(
  shape: AreaShape,
): { readonly shape: AreaShape; readonly notes: readonly string[] } | string {
  if (pointsIn(shape) <= MOST_SHAPE_POINTS) return { shape, notes: [] };
  for (const metres of [2, 4, 8, 16, 32, 64]) {
    const thin = shape.map((rings) => rings.map((ring) => thinned(ring, metres)));
    const kept = thin
      .map((rings) => rings.filter((ring) => ring.length >= 4))
      .filter((rings) => rings.length > 0);
    if (pointsIn(kept) > MOST_SHAPE_POINTS || kept.some((rings) => crossesItself(rings))) continue;
    const note = `${pointsIn(shape)} points thinned to ${pointsIn(kept)}, true to ${metres} m`;
    return { shape: kept, notes: [note] };
  }
  return `it has ${pointsIn(shape)} points, and at most ${MOST_SHAPE_POINTS} can be kept`;
}
