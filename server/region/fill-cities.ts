import type { AddressPoint } from './address-points';
import type { LonLat, OsmExtract } from './osm-extract';
import { isInsideRing, polygonsOf, type PolygonRings } from './rings';

/**
 * Administrative levels of towns and villages; in the United States 8 is a municipality and 7 a
 * township. Source: OpenStreetMap Wiki, "Tag:boundary=administrative", table of admin_level (from memory).
 */
const TOWN_LEVELS = new Set(['7', '8']);

interface Town {
  readonly name: string;
  readonly polygon: PolygonRings;
  readonly box: readonly [west: number, south: number, east: number, north: number];
}

/** The municipality around a point, by its boundary in the extract; empty where there is none. */
export function townAround(extract: OsmExtract): (at: LonLat) => string {
  const towns = extract.relations.flatMap((relation): Town[] => {
    const { boundary, admin_level: level, name } = relation.tags;
    if (boundary !== 'administrative' || !name || !TOWN_LEVELS.has(level ?? '')) return [];
    return polygonsOf(extract, relation).map((polygon) => ({
      name,
      polygon,
      box: boxOf(polygon[0] ?? []),
    }));
  });
  return (at) => {
    const [lon, lat] = at;
    const around = towns.find(
      ({ box: [west, south, east, north], polygon: [outer, ...holes] }) =>
        lon >= west &&
        lon <= east &&
        lat >= south &&
        lat <= north &&
        isInsideRing(at, outer!) &&
        !holes.some((hole) => isInsideRing(at, hole)),
    );
    return around?.name ?? '';
  };
}

function boxOf(ring: readonly LonLat[]): Town['box'] {
  let [west, south, east, north] = [180, 90, -180, -90];
  for (const [lon, lat] of ring) {
    west = Math.min(west, lon);
    east = Math.max(east, lon);
    south = Math.min(south, lat);
    north = Math.max(north, lat);
  }
  return [west, south, east, north];
}

/**
 * Names the town of points that name none: that of most points with the same postcode, since that
 * is what people say; else the municipality around them; else the nearest place.
 */
export function fillCities(
  points: readonly AddressPoint[],
  townAt: (at: LonLat) => string,
): AddressPoint[] {
  if (points.every(({ city }) => city !== '')) return [...points];
  const byPostcode = cityByPostcode(points);
  return points.map((point) =>
    point.city === ''
      ? { ...point, city: byPostcode.get(point.postcode) ?? townAt(point.at) }
      : point,
  );
}

function cityByPostcode(points: readonly AddressPoint[]): Map<string, string> {
  const counts = new Map<string, Map<string, number>>();
  for (const { postcode, city } of points) {
    if (postcode === '' || city === '') continue;
    const cities = counts.get(postcode) ?? new Map<string, number>();
    cities.set(city, (cities.get(city) ?? 0) + 1);
    counts.set(postcode, cities);
  }
  return new Map(
    [...counts].map(([postcode, cities]) => [
      postcode,
      [...cities].sort((a, b) => b[1] - a[1])[0]![0],
    ]),
  );
}
