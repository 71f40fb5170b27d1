import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { gzipSync } from 'node:zlib';
import type { Geometry, Position } from 'geojson';
import GeoJSONVT, { type LegacyFeature } from 'geojson-vt';
import { fromGeojsonVt } from '@maplibre/vt-pbf';
import type { AddressPoint } from './address-points';
import {
  LAYERS,
  MAX_ZOOM,
  MIN_ZOOM,
  type LayerName,
  type MapFeature,
  type MapLayers,
} from './map-layers';

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

/**
 * Up to here tiles are cut from all features at once; the zooms above, where the many small features
 * are, block by block: the tile index keeps every tile that it has cut.
 */
const BLOCK_ZOOM = 11;

type Indexes = readonly { readonly name: LayerName; readonly index: GeoJSONVT }[];

/** Writes `z/x/y.pbf` for every tile that holds something, packed with gzip. */
export async function writeTiles(
  layers: MapLayers,
  box: Box,
  folder: string,
  onProgress?: (share: number) => void,
): Promise<TileCount> {
  const writer = new TileWriter(folder);
  const far = indexesOf(layers, ({ minzoom }) => minzoom <= BLOCK_ZOOM);
  for (let z = MIN_ZOOM; z <= BLOCK_ZOOM; z++) await writer.write(far, z, spanOf(box, z));

  const near = nearFeatures(layers);
  const blocks = spanOf(box, BLOCK_ZOOM);
  const count = (blocks.right - blocks.left + 1) * (blocks.bottom - blocks.top + 1);
  let done = 0;
  for (let x = blocks.left; x <= blocks.right; x++)
    for (let y = blocks.top; y <= blocks.bottom; y++) {
      const indexes = indexesIn(near, x, y);
      for (let z = BLOCK_ZOOM + 1; z <= MAX_ZOOM; z++)
        await writer.write(indexes, z, within(spanOf(box, z), x, y, z));
      onProgress?.(++done / count);
    }
  return { tiles: writer.tiles, bytes: writer.bytes };
}

/** Columns and rows of tiles, both ends included. */
interface TileSpan {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

const spanOf = ([west, south, east, north]: Box, z: number): TileSpan => ({
  left: columnOf(west, z),
  right: columnOf(east, z),
  top: rowOf(north, z),
  bottom: rowOf(south, z),
});

/** The part of a span that lies in one block. */
function within(span: TileSpan, blockX: number, blockY: number, z: number): TileSpan {
  const across = 2 ** (z - BLOCK_ZOOM);
  return {
    left: Math.max(span.left, blockX * across),
    right: Math.min(span.right, (blockX + 1) * across - 1),
    top: Math.max(span.top, blockY * across),
    bottom: Math.min(span.bottom, (blockY + 1) * across - 1),
  };
}

const indexOf = (features: readonly MapFeature[]): GeoJSONVT =>
  new GeoJSONVT(
    {
      type: 'FeatureCollection',
      features: features.map(({ feature, minzoom, maxzoom }) => ({
        ...feature,
        properties: { ...feature.properties, minzoom, maxzoom },
      })),
    },
    { maxZoom: MAX_ZOOM, tolerance: TOLERANCE, extent: EXTENT, buffer: BUFFER, indexMaxZoom: 6 },
  );

const indexesOf = (layers: MapLayers, isWanted: (one: MapFeature) => boolean): Indexes =>
  LAYERS.map((name) => ({ name, index: indexOf(layers.features[name].filter(isWanted)) }));

interface BoxedFeature {
  readonly one: MapFeature;
  /** In columns and rows of the blocks, with fractions. */
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

type NearFeatures = readonly { readonly name: LayerName; readonly features: BoxedFeature[] }[];

const nearFeatures = (layers: MapLayers): NearFeatures =>
  LAYERS.map((name) => ({
    name,
    features: layers.features[name].filter(({ maxzoom }) => maxzoom > BLOCK_ZOOM).map(boxed),
  }));

function boxed(one: MapFeature): BoxedFeature {
  const scale = 2 ** BLOCK_ZOOM;
  let [left, right, top, bottom] = [Infinity, -Infinity, Infinity, -Infinity];
  for (const [lon, lat] of positionsOf(one.feature.geometry)) {
    const x = ((lon! + 180) / 360) * scale;
    const y = mercatorY(lat!) * scale;
    left = Math.min(left, x);
    right = Math.max(right, x);
    top = Math.min(top, y);
    bottom = Math.max(bottom, y);
  }
  return { one, left, right, top, bottom };
}

function positionsOf(geometry: Geometry): readonly Position[] {
  switch (geometry.type) {
    case 'Point':
      return [geometry.coordinates];
    case 'LineString':
      return geometry.coordinates;
    case 'Polygon':
      // Holes lie within.
      return geometry.coordinates[0] ?? [];
    default:
      throw new Error(`the map has no ${geometry.type}`);
  }
}

/** What a block's tiles show, with what reaches over their edges. */
function indexesIn(near: NearFeatures, x: number, y: number): Indexes {
  const reach = BUFFER / EXTENT;
  return near.map(({ name, features }) => ({
    name,
    index: indexOf(
      features
        .filter(
          ({ left, right, top, bottom }) =>
            right >= x - reach &&
            left <= x + 1 + reach &&
            bottom >= y - reach &&
            top <= y + 1 + reach,
        )
        .map(({ one }) => one),
    ),
  }));
}

class TileWriter {
  tiles = 0;
  bytes = 0;
  private readonly columns = new Set<string>();

  constructor(private readonly folder: string) {}

  async write(indexes: Indexes, z: number, span: TileSpan): Promise<void> {
    for (let x = span.left; x <= span.right; x++)
      for (let y = span.top; y <= span.bottom; y++) {
        const found: Partial<Record<LayerName, { features: LegacyFeature[] }>> = {};
        for (const { name, index } of indexes) {
          const features =
            index.getTile(z, x, y)?.features.flatMap((feature) => shownAt(z, feature)) ?? [];
          if (features.length > 0) found[name] = { features };
        }
        if (Object.keys(found).length === 0) continue;
        const column = join(this.folder, String(z), String(x));
        if (!this.columns.has(column)) await mkdir(column, { recursive: true });
        this.columns.add(column);
        this.bytes += await writeTile(join(column, `${y}.pbf`), found);
        this.tiles++;
      }
  }
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
