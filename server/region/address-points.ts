import Flatbush from 'flatbush';
import { fillCities, townAround } from './fill-cities';
import { linesOf, type LonLat, type OsmExtract } from './osm-extract';
import { placeOf, roadClassOf } from './map-layers';
import { numberRangesOf } from './number-ranges';
import type { Tags } from './osm-model';

export interface AddressPoint {
  readonly at: LonLat;
  /** As written: '1210', '218-09', '12A'. */
  readonly number: string;
  readonly street: string;
  readonly city: string;
  readonly postcode: string;
  /** Number of flats behind the door; 1 when nothing is said. */
  readonly flats: number;
}

export interface NamedStreet {
  readonly name: string;
  readonly city: string;
  /** A place on the street, about its middle. */
  readonly at: LonLat;
}

/** Where two named streets meet. */
export interface StreetCorner {
  readonly first: string;
  readonly second: string;
  readonly city: string;
  readonly at: LonLat;
}

/** House numbers that lie evenly along a line between two known houses. */
export interface NumberRange {
  readonly street: string;
  readonly city: string;
  readonly postcode: string;
  readonly from: string;
  readonly to: string;
  /** Of the numbers between: each, or each second. */
  readonly step: 1 | 2;
  /** From the first number's place to the last one's; two points or more. */
  readonly line: readonly LonLat[];
}

/** The number by which people call a road that has a name as well. */
export interface RouteNumber {
  readonly number: string;
  readonly street: string;
}

export interface PlaceName {
  readonly name: string;
  readonly kind: string;
  readonly city: string;
  /** The street beside it, when there is one. */
  readonly street?: string;
  readonly at: LonLat;
}

export interface AddressBook {
  readonly addresses: readonly AddressPoint[];
  readonly streets: readonly NamedStreet[];
  readonly corners: readonly StreetCorner[];
  readonly places: readonly PlaceName[];
  readonly ranges?: readonly NumberRange[];
  readonly routes?: readonly RouteNumber[];
}

/** Place kinds whose name serves as the city of an address that has none. */
const CITY_KINDS = ['city', 'town', 'village', 'suburb', 'borough', 'hamlet', 'neighbourhood'];

/** The town of a place: the municipality around it, or the nearest place with a name. */
export function townFinder(extract: OsmExtract): (at: LonLat) => string {
  const around = townAround(extract);
  const towns = extract.namedNodes.filter(
    ({ tags }) => tags['name'] && CITY_KINDS.includes(tags['place'] ?? ''),
  );
  const nearest = nearestOf(towns);
  return (at) => around(at) || (nearest(at)?.tags['name'] ?? '');
}

/** The address points of an extract, each with its town. */
export const ownAddresses = (
  extract: OsmExtract,
  townAt: (at: LonLat) => string = townFinder(extract),
): AddressPoint[] => withoutRepeats(fillCities(rawAddresses(extract), townAt));

/** The streets, corners and named places of an extract, with these addresses. */
export function bookOf(
  extract: OsmExtract,
  addresses: readonly AddressPoint[],
  townAt: (at: LonLat) => string = townFinder(extract),
): AddressBook {
  const nearest = nearestOf(addresses);
  // Most addresses name their city; a road between them belongs where its houses do.
  const cityAt = (at: LonLat): string => nearest(at)?.city || townAt(at);
  const { streets, corners } = streetsOf(extract, addresses, cityAt);
  const places = extract.namedNodes.flatMap(({ at, tags }): PlaceName[] => {
    const place = placeOf(tags);
    if (!place) return [];
    const isTown = Boolean(tags['place']);
    return [
      {
        name: tags['name']!,
        kind: place.kind,
        city: tags['addr:city'] ?? (isTown ? '' : cityAt(at)),
        street: tags['addr:street'] ?? (isTown ? '' : (nearest(at, BESIDE_METRES)?.street ?? '')),
        at,
      },
    ];
  });
  return {
    addresses,
    streets,
    corners,
    places,
    ranges: numberRangesOf(extract, cityAt),
    routes: routeNumbersOf(extract),
  };
}

/** A place this near to a house stands on the same street. Our estimate. */
const BESIDE_METRES = 120;
const METRES_PER_DEGREE = 111_195;

/** Finds the nearest of a set of points, no farther than a limit. */
function nearestOf<T extends { readonly at: LonLat }>(
  points: readonly T[],
): (at: LonLat, metres?: number) => T | undefined {
  if (points.length === 0) return () => undefined;
  const squeeze = Math.cos((points[0]!.at[1] * Math.PI) / 180);
  const index = new Flatbush(points.length);
  for (const { at } of points) index.add(at[0] * squeeze, at[1]);
  index.finish();
  return ([lon, lat], metres = Infinity) => {
    const found = index.neighbors(lon * squeeze, lat, 1, metres / METRES_PER_DEGREE)[0];
    return found === undefined ? undefined : points[found];
  };
}

/** The numbers of named roads: a caller on Heron Highway may say "highway 30". */
function routeNumbersOf(extract: OsmExtract): RouteNumber[] {
  const found = new Map<string, RouteNumber>();
  for (const { tags } of extract.ways.values()) {
    const street = tags['name'];
    if (!street || !tags['ref'] || roadClassOf(tags) === null) continue;
    for (const ref of tags['ref'].split(';')) {
      const number = /\d+[A-Za-z]?\s*$/.exec(ref)?.[0].trim();
      if (number) found.set(`${number}|${street}`, { number, street });
    }
  }
  return [...found.values()];
}

/** As the extract has them; some name no town. */
function rawAddresses(extract: OsmExtract): AddressPoint[] {
  const found: AddressPoint[] = [];
  const add = (at: LonLat, tags: Tags): void => {
    const street = tags['addr:street'] ?? tags['addr:place'];
    const numbers = tags['addr:housenumber'];
    if (!street || !numbers) return;
    // One building may carry several numbers: "12;14".
    for (const number of numbers.split(/[;,]/).map((part) => part.trim())) {
      if (number === '') continue;
      found.push({
        at,
        number,
        street: street.trim(),
        city: (tags['addr:city'] ?? '').trim(),
        postcode: (tags['addr:postcode'] ?? '').trim(),
        flats: flatsIn(tags['addr:flats']),
      });
    }
  };
  for (const { at, tags } of extract.namedNodes) if (tags['addr:housenumber']) add(at, tags);
  for (const way of extract.ways.values()) {
    if (!way.tags['addr:housenumber']) continue;
    const at = middleOf(linesOf(extract, way).flat());
    if (at) add(at, way.tags);
  }
  return found;
}

function middleOf(points: readonly LonLat[]): LonLat | null {
  if (points.length === 0) return null;
  const lons = points.map(([lon]) => lon);
  const lats = points.map(([, lat]) => lat);
  const middle = (values: readonly number[]): number =>
    Math.round(((Math.min(...values) + Math.max(...values)) / 2) * 1e7) / 1e7;
  return [middle(lons), middle(lats)];
}

/** How many flats an `addr:flats` value such as "1-12" or "1-4;7" names. */
export function flatsIn(value: string | undefined): number {
  if (!value) return 1;
  let count = 0;
  for (const part of value.split(/[;,]/)) {
    const range = /^\s*(\d+)\s*-\s*(\d+)\s*$/.exec(part);
    count += range ? Math.max(1, Number(range[2]) - Number(range[1]) + 1) : 1;
  }
  return Math.min(count, 2_000);
}

/** Flats and shops often repeat their building's address; the first stays. */
function withoutRepeats(addresses: readonly AddressPoint[]): AddressPoint[] {
  const seen = new Set<string>();
  return addresses.filter(({ number, street, city, postcode }) => {
    const key = `${number}|${street}|${city}|${postcode}`.toLowerCase();
    if (seen.has(key)) return false;
    seen.add(key);
    return true;
  });
}

function streetsOf(
  extract: OsmExtract,
  addresses: readonly AddressPoint[],
  cityAt: (at: LonLat) => string,
): { streets: NamedStreet[]; corners: StreetCorner[] } {
  const streets = new Map<string, NamedStreet>();
  const add = (name: string, city: string, at: LonLat): void => {
    const key = `${name}|${city}`;
    if (!streets.has(key)) streets.set(key, { name, city, at });
  };
  const namesAt = new Map<number, Set<string>>();
  for (const way of extract.ways.values()) {
    const name = way.tags['name'];
    if (!name || roadClassOf(way.tags) === null) continue;
    const line = linesOf(extract, way).sort((a, b) => b.length - a.length)[0];
    if (line) add(name, cityAt(line[line.length >> 1]!), line[line.length >> 1]!);
    for (const ref of way.refs) {
      const names = namesAt.get(ref);
      if (names) names.add(name);
      else namesAt.set(ref, new Set([name]));
    }
  }
  for (const { street, city, at } of addresses) add(street, city, at);
  const corners: StreetCorner[] = [];
  for (const [node, names] of namesAt) {
    if (names.size < 2) continue;
    const at = extract.at(node);
    if (!at) continue;
    const sorted = [...names].sort();
    const city = cityAt(at);
    sorted.forEach((first, i) =>
      sorted.slice(i + 1).forEach((second) => corners.push({ first, second, city, at })),
    );
  }
  return { streets: [...streets.values()], corners };
}
