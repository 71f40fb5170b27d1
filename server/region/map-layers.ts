import type { Feature, Position } from 'geojson';
import { postalStreet } from '@shared/domain/address/street-words';
import { thinned } from '@shared/domain/thin-line';
import { landOf } from './coastline';
import { joinLines } from './join-lines';
import { linesOf, type LonLat, type OsmExtract } from './osm-extract';
import type { OsmWay, Tags } from './osm-model';
import { innerPoint, polygonsOf, ringOf, signedArea, type PolygonRings } from './rings';

/** The layers of a tile; the map's style names them. */
export const LAYERS = [
  'land',
  'green',
  'water',
  'waterways',
  'buildings',
  'roads',
  'power',
  'places',
] as const;
export type LayerName = (typeof LAYERS)[number];

export type RoadClass = 'motorway' | 'primary' | 'secondary' | 'tertiary' | 'local' | 'service';

/** Shown from `minzoom` to `maxzoom`; the two are kept out of the tile. */
export interface MapFeature {
  readonly minzoom: number;
  readonly maxzoom: number;
  readonly feature: Feature;
}

export interface MapLayers {
  readonly features: Readonly<Record<LayerName, readonly MapFeature[]>>;
  readonly hasCoastline: boolean;
}

export const MIN_ZOOM = 8;
export const MAX_ZOOM = 14;

const ROAD_CLASSES: Readonly<Record<string, RoadClass>> = {
  motorway: 'motorway',
  motorway_link: 'motorway',
  trunk: 'motorway',
  trunk_link: 'motorway',
  primary: 'primary',
  primary_link: 'primary',
  secondary: 'secondary',
  secondary_link: 'secondary',
  tertiary: 'tertiary',
  tertiary_link: 'tertiary',
  unclassified: 'local',
  residential: 'local',
  living_street: 'local',
  road: 'local',
  service: 'service',
};

/** Back roads join the villages, so they show as soon as the larger roads that they meet. */
const minzoomOf = (tags: Tags, roadClass: RoadClass): number =>
  tags['highway'] === 'unclassified' ? 10 : ROAD_MINZOOM[roadClass];

const ROAD_MINZOOM: Readonly<Record<RoadClass, number>> = {
  motorway: 8,
  primary: 8,
  secondary: 8,
  tertiary: 9,
  local: 12,
  service: 13,
};

export const roadClassOf = (tags: Tags): RoadClass | null =>
  tags['area'] === 'yes' ? null : (ROAD_CLASSES[tags['highway'] ?? ''] ?? null);

/** Sorts an extract into the layers of the map. */
export function mapLayers(extract: OsmExtract): MapLayers {
  const features: Record<LayerName, MapFeature[]> = {
    land: [],
    green: [],
    water: [],
    waterways: [],
    buildings: [],
    roads: [],
    power: [],
    places: [],
  };
  const land = landOf(extract);
  for (const rings of land) features.land.push(polygon(rings, {}, MIN_ZOOM));

  const addArea = (tags: Tags, rings: () => PolygonRings[]): void => {
    const area = areaOf(tags);
    if (!area) return;
    const polygons = rings();
    for (const own of polygons)
      features[area.layer].push(polygon(own, { kind: area.kind }, area.minzoom));
    const largest = [...polygons].sort(
      (a, b) => Math.abs(signedArea(b[0]!)) - Math.abs(signedArea(a[0]!)),
    )[0];
    // The map library sets a polygon's name at its first corner, so names are points of their own.
    if (largest && tags['name'] && area.layer !== 'buildings') {
      features.places.push(
        pointFeature(
          innerPoint(largest[0]!),
          { kind: area.layer, name: tags['name'] },
          Math.max(11, area.minzoom),
        ),
      );
    }
  };
  for (const way of extract.ways.values()) {
    addArea(way.tags, () => {
      const ring = ringOf(extract, way.refs);
      return ring ? [[ring]] : [];
    });
    const power = powerLineOf(way.tags);
    if (power)
      for (const line of linesOf(extract, way))
        features.power.push(lineFeature(line, { kind: power.kind }, power.minzoom, MAX_ZOOM));
    if (
      way.tags['waterway'] === 'river' ||
      way.tags['waterway'] === 'stream' ||
      way.tags['waterway'] === 'canal'
    ) {
      for (const line of linesOf(extract, way)) {
        features.waterways.push(
          lineFeature(
            line,
            kindAndName(way.tags['waterway'], way.tags),
            way.tags['waterway'] === 'stream' ? 12 : 9,
            MAX_ZOOM,
          ),
        );
      }
    }
  }
  for (const relation of extract.relations) {
    if (relation.tags['type'] === 'multipolygon')
      addArea(relation.tags, () => polygonsOf(extract, relation));
  }
  features.roads.push(...roadFeatures(extract));
  for (const { at, tags } of extract.namedNodes) {
    if (tags['power'] === 'substation')
      features.power.push(pointFeature(at, { kind: 'substation' }, SUBSTATION_MINZOOM));
    const place = placeOf(tags);
    if (place) {
      features.places.push(
        pointFeature(at, { kind: place.kind, name: tags['name']! }, place.minzoom),
      );
    }
  }
  return { features, hasCoastline: land.length > 0 };
}

const SUBSTATION_MINZOOM = 10;

/** Lines that carry power, whether between substations or along the streets. */
function powerLineOf(tags: Tags): { kind: string; minzoom: number } | null {
  switch (tags['power']) {
    case 'line':
      return { kind: 'line', minzoom: 10 };
    case 'minor_line':
    case 'cable':
      return { kind: tags['power'], minzoom: 12 };
    default:
      return null;
  }
}

const kindAndName = (kind: string, tags: Tags): Record<string, string> =>
  tags['name'] ? { kind, name: tags['name'] } : { kind };

interface Area {
  readonly layer: 'green' | 'water' | 'buildings';
  readonly kind: string;
  readonly minzoom: number;
}

function areaOf(tags: Tags): Area | null {
  const { natural, landuse, leisure, waterway } = tags as Record<
    'natural' | 'landuse' | 'leisure' | 'waterway',
    string | undefined
  >;
  if (natural === 'water' || landuse === 'reservoir' || waterway === 'riverbank')
    return { layer: 'water', kind: tags['water'] ?? 'water', minzoom: 8 };
  if (natural === 'wood' || landuse === 'forest')
    return { layer: 'green', kind: 'wood', minzoom: 10 };
  if (natural === 'wetland' || natural === 'beach')
    return { layer: 'green', kind: natural, minzoom: 11 };
  if (leisure === 'nature_reserve') return { layer: 'green', kind: 'reserve', minzoom: 10 };
  if (
    leisure === 'park' ||
    leisure === 'garden' ||
    leisure === 'golf_course' ||
    landuse === 'recreation_ground' ||
    landuse === 'grass' ||
    landuse === 'cemetery'
  )
    return { layer: 'green', kind: 'park', minzoom: leisure === 'park' ? 11 : 13 };
  if (tags['building'] && tags['building'] !== 'no')
    return { layer: 'buildings', kind: 'building', minzoom: MAX_ZOOM };
  return null;
}

const PLACE_MINZOOM: Readonly<Record<string, number>> = {
  county: 8,
  city: 8,
  town: 9,
  island: 9,
  village: 10,
  suburb: 11,
  hamlet: 12,
  neighbourhood: 13,
  locality: 13,
  farm: 14,
};

/** Which places have a name on the map, and from which zoom. */
export function placeOf(tags: Tags): { kind: string; minzoom: number } | null {
  if (!tags['name']) return null;
  const place = PLACE_MINZOOM[tags['place'] ?? ''];
  if (place !== undefined) return { kind: tags['place']!, minzoom: place };
  if (tags['natural'] === 'bay' || tags['natural'] === 'strait') return { kind: 'sea', minzoom: 9 };
  const amenity = tags['amenity'];
  if (amenity && AMENITIES.has(amenity))
    return { kind: amenity, minzoom: amenity === 'hospital' ? 12 : 14 };
  if (tags['shop'] === 'supermarket') return { kind: 'grocery', minzoom: 14 };
  if (tags['leisure'] === 'marina') return { kind: 'marina', minzoom: 13 };
  return null;
}

const AMENITIES = new Set([
  'hospital',
  'clinic',
  'school',
  'pharmacy',
  'fire_station',
  'townhall',
  'library',
  'police',
  'place_of_worship',
  'ferry_terminal',
]);

/** Names are set on straight stretches only; points that do not matter to the eye would break them. */
const THINNING_METRES = 2;

/** Roads for the two ends of the scale: joined to long lines below z13, with their bridges from z13. */
function roadFeatures(extract: OsmExtract): MapFeature[] {
  const roads: { way: OsmWay; roadClass: RoadClass; points: LonLat[] }[] = [];
  for (const way of extract.ways.values()) {
    const roadClass = roadClassOf(way.tags);
    if (roadClass)
      for (const points of linesOf(extract, way)) roads.push({ way, roadClass, points });
  }
  const properties = (
    { way, roadClass }: { way: OsmWay; roadClass: RoadClass },
    withBridge: boolean,
  ): Record<string, string> => ({
    class: roadClass,
    ...(way.tags['name'] ? { name: postalStreet(way.tags['name']) } : {}),
    ...(way.tags['ref'] ? { ref: way.tags['ref'] } : {}),
    ...(withBridge && isBridge(way) ? { bridge: 'yes' } : {}),
  });
  const joined = (withBridge: boolean): JoinedRoad[] =>
    joinLines(
      roads.map((road) => {
        const data = {
          tags: properties(road, withBridge),
          minzoom: minzoomOf(road.way.tags, road.roadClass),
        };
        return { kind: JSON.stringify(data), points: road.points, data };
      }),
    ).map(({ points, data }) => ({ points: thinned(points, THINNING_METRES), ...data }));
  const near = joined(true).map(({ points, tags, minzoom }) =>
    lineFeature(points, tags, Math.max(FIRST_NEAR_ZOOM, minzoom), MAX_ZOOM),
  );
  const far = joined(false)
    .filter(({ minzoom }) => minzoom < FIRST_NEAR_ZOOM)
    .map(({ points, tags, minzoom }) => lineFeature(points, tags, minzoom, FIRST_NEAR_ZOOM - 1));
  return [...near, ...far];
}

interface JoinedRoad {
  readonly points: LonLat[];
  readonly tags: Record<string, string>;
  readonly minzoom: number;
}

/** From here on bridges are told apart. */
const FIRST_NEAR_ZOOM = 13;

const pointFeature = (
  at: LonLat,
  properties: Record<string, string>,
  minzoom: number,
): MapFeature => ({
  minzoom,
  maxzoom: MAX_ZOOM,
  feature: { type: 'Feature', properties, geometry: { type: 'Point', coordinates: [...at] } },
});

const isBridge = ({ tags }: OsmWay): boolean =>
  tags['bridge'] !== undefined && tags['bridge'] !== 'no';

const lineFeature = (
  points: readonly LonLat[],
  properties: Record<string, string>,
  minzoom: number,
  maxzoom: number,
): MapFeature => ({
  minzoom,
  maxzoom,
  feature: {
    type: 'Feature',
    properties,
    geometry: { type: 'LineString', coordinates: points.map((p): Position => [...p]) },
  },
});

const polygon = (
  rings: PolygonRings,
  properties: Record<string, string>,
  minzoom: number,
): MapFeature => ({
  minzoom,
  maxzoom: MAX_ZOOM,
  feature: {
    type: 'Feature',
    properties,
    geometry: {
      type: 'Polygon',
      coordinates: rings.map((ring) => ring.map((p): Position => [...p])),
    },
  },
});
