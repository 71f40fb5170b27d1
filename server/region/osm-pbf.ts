import { PbfReader } from 'pbf';
import { guarded, osmBlobs } from './osm-blobs';
import type { OsmMember, OsmRelation, OsmWay, Tags } from './osm-model';
import { UnreadableRegion } from './unreadable-region';

/** Is told what a file holds, in the file's order; files need not be sorted. */
export interface OsmVisitor {
  /** Tags are null for the many nodes that have none. */
  node(id: number, lon: number, lat: number, tags: Tags | null): void;
  way(way: OsmWay): void;
  relation(relation: OsmRelation): void;
}

const UNDERSTOOD = new Set(['OsmSchema-V0.6', 'DenseNodes']);
const MEMBER_TYPES = ['node', 'way', 'relation'] as const;

/**
 * Reads an `.osm.pbf` file from beginning to end.
 *
 * @param onProgress is told the share of the file that has been read, 0 to 1
 * @throws UnreadableRegion with a sentence for the person who gave the file
 */
export async function readOsmPbf(
  from: string | Uint8Array,
  visitor: OsmVisitor,
  onProgress?: (share: number) => void,
): Promise<void> {
  let hasHeader = false;
  for await (const { type, content, offset, total } of osmBlobs(from)) {
    if (type === 'OSMHeader') {
      hasHeader = true;
      guarded(offset, () => checkFeatures(content));
    } else if (type === 'OSMData') {
      if (!hasHeader)
        throw new UnreadableRegion(
          'The file has no OSMHeader block; it is no OpenStreetMap extract.',
        );
      guarded(offset, () => readBlock(content, visitor));
    }
    // Blocks of other types may be skipped, says the format.
    onProgress?.(offset / total);
  }
}

function checkFeatures(content: Uint8Array): void {
  new PbfReader(content).readFields((tag, _, pbf) => {
    if (tag !== 4) return;
    const feature = pbf.readString();
    if (!UNDERSTOOD.has(feature)) {
      throw new UnreadableRegion(
        `The file needs "${feature}", which this importer does not understand.`,
      );
    }
  }, null);
}

/** Turns a block's whole numbers into degrees, and its string numbers into strings. */
class Block {
  readonly strings: string[] = [];
  readonly groups: Uint8Array[] = [];
  granularity = 100;
  latOffset = 0;
  lonOffset = 0;

  lat(granules: number): number {
    return (this.latOffset + this.granularity * granules) / 1e9;
  }

  lon(granules: number): number {
    return (this.lonOffset + this.granularity * granules) / 1e9;
  }

  text(number: number | undefined): string {
    const found = number === undefined ? undefined : this.strings[number];
    if (found === undefined) throw new Error(`string ${number} is missing`);
    return found;
  }

  tags(keys: readonly number[], values: readonly number[]): Tags {
    const tags: Record<string, string> = {};
    keys.forEach((key, i) => {
      tags[this.text(key)] = this.text(values[i]);
    });
    return tags;
  }
}

function readBlock(content: Uint8Array, visitor: OsmVisitor): void {
  const block = new Block();
  new PbfReader(content).readFields((tag, result, pbf) => {
    if (tag === 1)
      pbf.readMessage(
        (t, strings, table) => void (t === 1 && strings.push(table.readString())),
        result.strings,
      );
    else if (tag === 2) result.groups.push(pbf.readBytes());
    else if (tag === 17) result.granularity = pbf.readVarint();
    else if (tag === 19) result.latOffset = pbf.readVarint(true);
    else if (tag === 20) result.lonOffset = pbf.readVarint(true);
  }, block);
  // Offsets follow the groups in the file, so groups wait until the whole block is known.
  for (const group of block.groups) {
    new PbfReader(group).readFields((tag, _, pbf) => {
      if (tag === 1) readNode(pbf.readBytes(), block, visitor);
      else if (tag === 2) readDenseNodes(pbf.readBytes(), block, visitor);
      else if (tag === 3) visitor.way(readWay(pbf.readBytes(), block));
      else if (tag === 4) visitor.relation(readRelation(pbf.readBytes(), block));
    }, null);
  }
}

function readNode(bytes: Uint8Array, block: Block, visitor: OsmVisitor): void {
  const node = { id: 0, keys: [] as number[], values: [] as number[], lat: 0, lon: 0 };
  new PbfReader(bytes).readFields((tag, result, pbf) => {
    if (tag === 1) result.id = pbf.readSVarint();
    else if (tag === 2) pbf.readPackedVarint(result.keys);
    else if (tag === 3) pbf.readPackedVarint(result.values);
    else if (tag === 8) result.lat = pbf.readSVarint();
    else if (tag === 9) result.lon = pbf.readSVarint();
  }, node);
  const tags = node.keys.length > 0 ? block.tags(node.keys, node.values) : null;
  visitor.node(node.id, block.lon(node.lon), block.lat(node.lat), tags);
}

function readDenseNodes(bytes: Uint8Array, block: Block, visitor: OsmVisitor): void {
  const dense = {
    ids: [] as number[],
    lats: [] as number[],
    lons: [] as number[],
    keysValues: [] as number[],
  };
  new PbfReader(bytes).readFields((tag, result, pbf) => {
    if (tag === 1) pbf.readPackedSVarint(result.ids);
    else if (tag === 8) pbf.readPackedSVarint(result.lats);
    else if (tag === 9) pbf.readPackedSVarint(result.lons);
    else if (tag === 10) pbf.readPackedVarint(result.keysValues);
  }, dense);
  const { ids, lats, lons, keysValues } = dense;
  if (lats.length !== ids.length || lons.length !== ids.length)
    throw new Error('nodes without coordinates');
  let id = 0;
  let lat = 0;
  let lon = 0;
  let at = 0;
  for (let i = 0; i < ids.length; i++) {
    id += ids[i]!;
    lat += lats[i]!;
    lon += lons[i]!;
    let tags: Record<string, string> | null = null;
    while (at < keysValues.length && keysValues[at] !== 0) {
      tags ??= {};
      tags[block.text(keysValues[at])] = block.text(keysValues[at + 1]);
      at += 2;
    }
    at++;
    visitor.node(id, block.lon(lon), block.lat(lat), tags);
  }
}

function readWay(bytes: Uint8Array, block: Block): OsmWay {
  const way = { id: 0, keys: [] as number[], values: [] as number[], refs: [] as number[] };
  new PbfReader(bytes).readFields((tag, result, pbf) => {
    if (tag === 1) result.id = pbf.readVarint();
    else if (tag === 2) pbf.readPackedVarint(result.keys);
    else if (tag === 3) pbf.readPackedVarint(result.values);
    else if (tag === 8) pbf.readPackedSVarint(result.refs);
  }, way);
  return { id: way.id, refs: sums(way.refs), tags: block.tags(way.keys, way.values) };
}

function readRelation(bytes: Uint8Array, block: Block): OsmRelation {
  const relation = {
    id: 0,
    keys: [] as number[],
    values: [] as number[],
    roles: [] as number[],
    refs: [] as number[],
    types: [] as number[],
  };
  new PbfReader(bytes).readFields((tag, result, pbf) => {
    if (tag === 1) result.id = pbf.readVarint();
    else if (tag === 2) pbf.readPackedVarint(result.keys);
    else if (tag === 3) pbf.readPackedVarint(result.values);
    else if (tag === 8) pbf.readPackedVarint(result.roles);
    else if (tag === 9) pbf.readPackedSVarint(result.refs);
    else if (tag === 10) pbf.readPackedVarint(result.types);
  }, relation);
  const members = sums(relation.refs).map((ref, i): OsmMember => {
    const type = MEMBER_TYPES[relation.types[i] ?? 0];
    if (type === undefined) throw new Error('a member of unknown type');
    return { ref, type, role: block.text(relation.roles[i]) };
  });
  return { id: relation.id, members, tags: block.tags(relation.keys, relation.values) };
}

/** The format stores each number as its difference from the one before. */
function sums(differences: readonly number[]): number[] {
  let total = 0;
  return differences.map((difference) => (total += difference));
}
