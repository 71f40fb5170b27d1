import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { gunzipSync } from 'node:zlib';
import { PbfReader } from 'pbf';
import type { OsmNode, OsmRelation, OsmWay } from '../../server/region/osm-model';
import { readOsmPbf } from '../../server/region/osm-pbf';

/** A folder of its own under the system's temporary folder. */
export function temporaryFolder(): { path: string; remove: () => void } {
  const path = mkdtempSync(join(tmpdir(), 'thawline-region-'));
  return { path, remove: () => rmSync(path, { recursive: true, force: true }) };
}

export interface ReadOsm {
  readonly nodes: Map<number, OsmNode>;
  readonly ways: OsmWay[];
  readonly relations: OsmRelation[];
}

export async function readAll(pbf: string | Uint8Array): Promise<ReadOsm> {
  const result: ReadOsm = { nodes: new Map(), ways: [], relations: [] };
  await readOsmPbf(pbf, {
    node: (id, lon, lat, tags) => void result.nodes.set(id, { id, lon, lat, tags: tags ?? {} }),
    way: (way) => void result.ways.push(way),
    relation: (relation) => void result.relations.push(relation),
  });
  return result;
}

export interface DecodedLayer {
  readonly name: string;
  readonly version: number;
  readonly extent: number;
  readonly features: { type: number; properties: Record<string, string | number> }[];
}

/** Decodes a vector tile by the field numbers of the Mapbox Vector Tile specification 2.1, section 4. */
export function decodeTile(gzipped: Uint8Array): DecodedLayer[] {
  const layers: DecodedLayer[] = [];
  new PbfReader(gunzipSync(gzipped)).readFields((tag, result, pbf) => {
    if (tag === 3) result.push(decodeLayer(pbf.readBytes()));
  }, layers);
  return layers;
}

function decodeLayer(bytes: Uint8Array): DecodedLayer {
  const raw = {
    name: '',
    version: 0,
    extent: 0,
    keys: [] as string[],
    values: [] as (string | number)[],
    features: [] as Uint8Array[],
  };
  new PbfReader(bytes).readFields((tag, layer, pbf) => {
    if (tag === 15) layer.version = pbf.readVarint();
    else if (tag === 1) layer.name = pbf.readString();
    else if (tag === 2) layer.features.push(pbf.readBytes());
    else if (tag === 3) layer.keys.push(pbf.readString());
    else if (tag === 4) layer.values.push(decodeValue(pbf.readBytes()));
    else if (tag === 5) layer.extent = pbf.readVarint();
  }, raw);
  const features = raw.features.map((feature) => {
    const found = { type: 0, tags: [] as number[] };
    new PbfReader(feature).readFields((tag, result, pbf) => {
      if (tag === 2) pbf.readPackedVarint(result.tags);
      else if (tag === 3) result.type = pbf.readVarint();
    }, found);
    const properties: Record<string, string | number> = {};
    for (let i = 0; i < found.tags.length; i += 2)
      properties[raw.keys[found.tags[i]!]!] = raw.values[found.tags[i + 1]!]!;
    return { type: found.type, properties };
  });
  return { name: raw.name, version: raw.version, extent: raw.extent, features };
}

function decodeValue(bytes: Uint8Array): string | number {
  const found: { value: string | number } = { value: '' };
  new PbfReader(bytes).readFields((tag, result, pbf) => {
    if (tag === 1) result.value = pbf.readString();
    else if (tag === 2) result.value = pbf.readFloat();
    else if (tag === 3) result.value = pbf.readDouble();
    else if (tag === 4 || tag === 5) result.value = pbf.readVarint();
    else if (tag === 6) result.value = pbf.readSVarint();
  }, found);
  return found.value;
}
