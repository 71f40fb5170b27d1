import Flatbush from 'flatbush';
import type { FeederDto, FeederMap, SubstationDto } from '@shared/contract/feeders';
import type { LonLat as LonLatDto } from '@shared/contract/common';
import { isInShape } from '@shared/domain/outage-shape';
import type { AddressPoint } from './address-points';
import { linesOf, type LonLat, type OsmExtract } from './osm-extract';
import type { OsmWay, Tags } from './osm-model';
import { innerPoint, polygonsOf, ringOf, type PolygonRings } from './rings';

/**
 * How a feeder is written in OpenStreetMap data. The map's community has no tag for the area that a
 * feeder serves, so `boundary=power_feeder` is this project's own; `power=substation` and
 * `power=minor_line` are common tags (OpenStreetMap Wiki, "Key:power").
 *
 * - area: a closed way or a multipolygon with `boundary=power_feeder`, `ref` (unique), `name`,
 *   `substation`, and, where the power company has a plan for after a storm, `restoration:wave`
 *   (1 is first) and `restoration:hours` (after the storm)
 * - main line: ways with `power=minor_line` or `power=cable` and the feeder's `ref`
 */
export const FEEDER_TAG = { key: 'boundary', value: 'power_feeder' } as const;

export const NO_FEEDERS: FeederMap = { feeders: [], substations: [] };

/** Takes feeders and substations out of an extract; most extracts hold no feeders. */
export function feedersOf(extract: OsmExtract, addresses: readonly AddressPoint[]): FeederMap {
  const areas = feederAreas(extract);
  if (areas.size === 0) return NO_FEEDERS;
  const index = new Flatbush(Math.max(1, addresses.length));
  for (const { at } of addresses) index.add(at[0], at[1]);
  if (addresses.length === 0) index.add(0, 0);
  index.finish();
  const trunks = trunksOf(extract);
  const feeders = [...areas].map(([ref, { tags, polygons }]): FeederDto => ({
    id: ref,
    name: tags['name'] ?? ref,
    substation: tags['substation'] ?? '',
    customers: addresses.length === 0 ? 0 : addressesIn(polygons, addresses, index),
    polygons: polygons.map((rings) => rings.map(points)),
    trunk: (trunks.get(ref) ?? []).map(points),
    wave: waveOf(tags),
  }));
  feeders.sort((a, b) => (a.id < b.id ? -1 : 1));
  return { feeders, substations: substationsOf(extract) };
}

interface FeederArea {
  readonly tags: Tags;
  readonly polygons: PolygonRings[];
}

/** By `ref`; parts that share one belong to one feeder. */
function feederAreas(extract: OsmExtract): Map<string, FeederArea> {
  const areas = new Map<string, FeederArea>();
  const add = (tags: Tags, polygons: PolygonRings[]): void => {
    const ref = tags['ref'] ?? tags['name'];
    if (!ref || polygons.length === 0) return;
    const known = areas.get(ref);
    if (known) known.polygons.push(...polygons);
    else areas.set(ref, { tags, polygons: [...polygons] });
  };
  for (const way of extract.ways.values()) {
    if (way.tags[FEEDER_TAG.key] !== FEEDER_TAG.value) continue;
    const ring = ringOf(extract, way.refs);
    if (ring) add(way.tags, [[ring]]);
  }
  for (const relation of extract.relations) {
    if (relation.tags[FEEDER_TAG.key] === FEEDER_TAG.value)
      add(relation.tags, polygonsOf(extract, relation));
  }
  return areas;
}

const isMainLine = ({ tags }: OsmWay): boolean =>
  tags['power'] === 'minor_line' || tags['power'] === 'cable';

function trunksOf(extract: OsmExtract): Map<string, LonLat[][]> {
  const trunks = new Map<string, LonLat[][]>();
  for (const way of extract.ways.values()) {
    const ref = way.tags['ref'];
    if (!ref || !isMainLine(way)) continue;
    trunks.set(ref, [...(trunks.get(ref) ?? []), ...linesOf(extract, way)]);
  }
  return trunks;
}

function substationsOf(extract: OsmExtract): SubstationDto[] {
  const found: SubstationDto[] = [];
  const add = (tags: Tags, at: LonLat | null): void => {
    const name = tags['name'];
    if (tags['power'] === 'substation' && name && at) found.push({ name, at: [...at] });
  };
  for (const { at, tags } of extract.namedNodes) add(tags, at);
  for (const way of extract.ways.values()) {
    if (way.tags['power'] !== 'substation') continue;
    const ring = ringOf(extract, way.refs);
    add(way.tags, ring && innerPoint(ring));
  }
  return found.sort((a, b) => (a.name < b.name ? -1 : 1));
}

function addressesIn(
  polygons: readonly PolygonRings[],
  addresses: readonly AddressPoint[],
  index: Flatbush,
): number {
  let count = 0;
  for (const rings of polygons) {
    const [west, south, east, north] = boxOf(rings[0]!);
    for (const i of index.search(west, south, east, north))
      if (isInShape(addresses[i]!.at, [rings])) count++;
  }
  return count;
}

function boxOf(ring: readonly LonLat[]): [number, number, number, number] {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const [lon, lat] of ring) {
    west = Math.min(west, lon);
    south = Math.min(south, lat);
    east = Math.max(east, lon);
    north = Math.max(north, lat);
  }
  return [west, south, east, north];
}

/** A plan needs both numbers; half a plan is none. */
function waveOf(tags: Tags): FeederDto['wave'] {
  const order = Number(tags['restoration:wave'] ?? NaN);
  const hours = Number(tags['restoration:hours'] ?? NaN);
  return Number.isInteger(order) && order >= 1 && Number.isFinite(hours) && hours >= 0
    ? { order, hours }
    : null;
}

const points = (ring: readonly LonLat[]): LonLatDto[] => ring.map(([lon, lat]) => [lon, lat]);
