import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { gzipSync } from 'node:zlib';
import GeoJSONVT, { type LegacyFeature } from 'geojson-vt';
import { fromGeojsonVt } from '@maplibre/vt-pbf';
import type { AddressPoint } from './address-points';
import { LAYERS, MAX_ZOOM, MIN_ZOOM, type LayerName, type MapLayers } from './map-layers';

/** House numbers have tiles of their own, so that the map need not carry them at every zoom. */
export const ADDRESS_ZOOM = 16;
const EXTENT = 4_096;

/** Leaves out points closer than 4/4096 of a tile: less than a pixel at the tile's own zoom. */
const TOLERANCE = 4;
const BUFFER = 96;

export interface TileCount {
  readonly tiles: number;
  readonly bytes: number;
}

type Box = readonly [west: number, south: number, east: number, north: number];

const columnOf = (lon: number, z: number): number =>
  Math.min(2 ** z - 1, Math.max(0, Math.floor(((lon + 180) / 360) * 2 ** z)));

/** Web Mercator's northing as a share of the map, 0 in the north. */
function mercatorY(lat: number): number {
  const sine = Math.sin((lat * Math.PI) / 180);
  return 0.5 - Math.log((1 + sine) / (1 - sine)) / (4 * Math.PI);
}

const rowOf = (lat: number, z: number): number =>
  Math.min(2 ** z - 1, Math.max(0, Math.floor(mercatorY(lat) * 2 ** z)));

/** Writes `z/x/y.pbf` for every tile that holds something, packed with gzip. */
export async function writeTiles(
  layers: MapLayers,
  box: Box,
  folder: string,
  onProgress?: (share: number) => void,
): Promise<TileCount> {
  const sources = LAYERS.map((name) => ({
    name,
    index: new GeoJSONVT(
      {
        type: 'FeatureCollection',
        features: layers.features[name].map(({ feature, minzoom, maxzoom }) => ({
          ...feature,
          properties: { ...feature.properties, minzoom, maxzoom },
        })),
      },
      { maxZoom: MAX_ZOOM, tolerance: TOLERANCE, extent: EXTENT, buffer: BUFFER, indexMaxZoom: 6 },
    ),
  }));
  let tiles = 0;
  let bytes = 0;
  const [west, south, east, north] = box;
  for (let z = MIN_ZOOM; z <= MAX_ZOOM; z++) {
    for (let x = columnOf(west, z); x <= columnOf(east, z); x++) {
      let isMade = false;
      for (let y = rowOf(north, z); y <= rowOf(south, z); y++) {
        const found: Partial<Record<LayerName, { features: LegacyFeature[] }>> = {};
        for (const { name, index } of sources) {
          const features =
            index.getTile(z, x, y)?.features.flatMap((feature) => shownAt(z, feature)) ?? [];
          if (features.length > 0) found[name] = { features };
        }
        if (Object.keys(found).length === 0) continue;
        if (!isMade) await mkdir(join(folder, String(z), String(x)), { recursive: true });
        isMade = true;
        bytes += await writeTile(join(folder, String(z), String(x), `${y}.pbf`), found);
        tiles++;
      }
    }
    // Each zoom holds about three times the tiles of the one before.
    onProgress?.(3 ** (z - MAX_ZOOM));
  }
  return { tiles, bytes };
}

function shownAt(z: number, feature: LegacyFeature): LegacyFeature[] {
  const { minzoom, maxzoom, ...tags } = feature.tags as { minzoom: number; maxzoom: number };
  return z >= minzoom && z <= maxzoom ? [{ ...feature, tags }] : [];
}

async function writeTile(
  path: string,
  layers: Partial<Record<string, { features: LegacyFeature[] }>>,
): Promise<number> {
  // The encoder's own tile type names only what it reads: type, geometry and tags.
  const pbf = fromGeojsonVt(layers as Parameters<typeof fromGeojsonVt>[0], {
    version: 2,
    extent: EXTENT,
  });
  const packed = gzipSync(pbf, { level: 9 });
  await writeFile(path, packed);
  return packed.length;
}

/** Writes house numbers as `addr/16/x/y.pbf`. */
export async function writeAddressTiles(
  addresses: readonly AddressPoint[],
  folder: string,
): Promise<TileCount> {
  const scale = 2 ** ADDRESS_ZOOM;
  const byTile = new Map<string, LegacyFeature[]>();
  for (const { at, number } of addresses) {
    const px = ((at[0] + 180) / 360) * scale;
    const py = mercatorY(at[1]) * scale;
    const x = Math.floor(px);
    const y = Math.floor(py);
    const feature: LegacyFeature = {
      type: 1,
      geometry: [[Math.floor((px - x) * EXTENT), Math.floor((py - y) * EXTENT)]],
      tags: { number },
    };
    const key = `${x}/${y}`;
    const known = byTile.get(key);
    if (known) known.push(feature);
    else byTile.set(key, [feature]);
  }
  let bytes = 0;
  const made = new Set<string>();
  for (const [key, features] of byTile) {
    const [x, y] = key.split('/') as [string, string];
    const column = join(folder, String(ADDRESS_ZOOM), x);
    if (!made.has(x)) await mkdir(column, { recursive: true });
    made.add(x);
    bytes += await writeTile(join(column, `${y}.pbf`), { addresses: { features } });
  }
  return { tiles: byTile.size, bytes };
}
