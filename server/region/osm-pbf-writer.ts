import { deflateSync } from 'node:zlib';
import { PbfWriter } from 'pbf';
import type { OsmData, OsmNode, OsmRelation, OsmWay, Tags } from './osm-model';

/** The format asks for no more than 8,000 entities to a block. */
const PER_BLOCK = 8_000;
const GRANULARITY = 100;
const MEMBER_TYPES = ['node', 'way', 'relation'] as const;

/**
 * Writes OpenStreetMap data as `.osm.pbf`: nodes, then ways, then relations, each sorted by id.
 *
 * Format: "PBF Format", OpenStreetMap Wiki, and `osmformat.proto`, `fileformat.proto` of OSM-binary.
 * No time stamps are written, so equal data gives equal bytes.
 */
export function writeOsmPbf(data: OsmData, program: string): Uint8Array {
  const blobs = [blob('OSMHeader', headerBlock(data.nodes, program))];
  for (const part of parted(byId(data.nodes))) blobs.push(blob('OSMData', block(part, writeNodes)));
  for (const part of parted(byId(data.ways))) blobs.push(blob('OSMData', block(part, writeWays)));
  for (const part of parted(byId(data.relations)))
    blobs.push(blob('OSMData', block(part, writeRelations)));
  return Buffer.concat(blobs);
}

const byId = <T extends { readonly id: number }>(items: readonly T[]): T[] =>
  [...items].sort((a, b) => a.id - b.id);

function parted<T>(items: readonly T[]): T[][] {
  const parts: T[][] = [];
  for (let i = 0; i < items.length; i += PER_BLOCK) parts.push(items.slice(i, i + PER_BLOCK));
  return parts;
}

function blob(type: 'OSMHeader' | 'OSMData', content: Uint8Array): Buffer {
  const packed = new PbfWriter();
  packed.writeVarintField(2, content.length);
  packed.writeBytesField(3, deflateSync(content, { level: 9 }));
  const body = packed.finish();
  const header = new PbfWriter();
  header.writeStringField(1, type);
  header.writeVarintField(3, body.length);
  const head = header.finish();
  const length = Buffer.alloc(4);
  length.writeUInt32BE(head.length);
  return Buffer.concat([length, head, body]);
}

function headerBlock(nodes: readonly OsmNode[], program: string): Uint8Array {
  let left = 180;
  let right = -180;
  let top = -90;
  let bottom = 90;
  for (const { lon, lat } of nodes) {
    left = Math.min(left, lon);
    right = Math.max(right, lon);
    top = Math.max(top, lat);
    bottom = Math.min(bottom, lat);
  }
  const pbf = new PbfWriter();
  // The bounding box counts in nanodegrees.
  pbf.writeMessage(
    1,
    (_, box) => {
      [left, right, top, bottom].forEach((degrees, i) =>
        box.writeSVarintField(i + 1, Math.round(degrees * 1e9)),
      );
    },
    null,
  );
  pbf.writeStringField(4, 'OsmSchema-V0.6');
  pbf.writeStringField(4, 'DenseNodes');
  pbf.writeStringField(5, 'Sort.Type_then_ID');
  pbf.writeStringField(16, program);
  return pbf.finish();
}

/** The strings of one block; number 0 is the empty string, which marks ends in dense nodes. */
class StringTable {
  readonly strings: string[] = [''];
  private readonly known = new Map<string, number>([['', 0]]);

  add(text: string): number {
    const found = this.known.get(text);
    if (found !== undefined) return found;
    this.known.set(text, this.strings.length);
    return this.strings.push(text) - 1;
  }
}

function block<T>(
  items: readonly T[],
  write: (items: readonly T[], strings: StringTable, group: PbfWriter) => void,
): Uint8Array {
  const strings = new StringTable();
  const group = new PbfWriter();
  write(items, strings, group);
  const packedGroup = group.finish();
  const pbf = new PbfWriter();
  pbf.writeMessage(
    1,
    (_, table) =>
      strings.strings.forEach((text) => table.writeBytesField(1, Buffer.from(text, 'utf8'))),
    null,
  );
  pbf.writeBytesField(2, packedGroup);
  pbf.writeVarintField(17, GRANULARITY);
  return pbf.finish();
}

/** Coordinates count in granules of 100 nanodegrees, which is 1e-7 degrees. */
const granules = (degrees: number): number => Math.round(degrees * 1e7);

function writeNodes(nodes: readonly OsmNode[], strings: StringTable, group: PbfWriter): void {
  const keysValues: number[] = [];
  for (const { tags } of nodes) {
    for (const [key, value] of Object.entries(tags))
      keysValues.push(strings.add(key), strings.add(value));
    keysValues.push(0);
  }
  group.writeMessage(
    2,
    (_, dense) => {
      dense.writePackedSVarint(1, differences(nodes.map(({ id }) => id)));
      dense.writePackedSVarint(8, differences(nodes.map(({ lat }) => granules(lat))));
      dense.writePackedSVarint(9, differences(nodes.map(({ lon }) => granules(lon))));
      dense.writePackedVarint(10, keysValues);
    },
    null,
  );
}

function writeWays(ways: readonly OsmWay[], strings: StringTable, group: PbfWriter): void {
  for (const way of ways) {
    group.writeMessage(
      3,
      (_, pbf) => {
        pbf.writeVarintField(1, way.id);
        writeTags(way.tags, strings, pbf);
        pbf.writePackedSVarint(8, differences(way.refs));
      },
      null,
    );
  }
}

function writeRelations(
  relations: readonly OsmRelation[],
  strings: StringTable,
  group: PbfWriter,
): void {
  for (const relation of relations) {
    group.writeMessage(
      4,
      (_, pbf) => {
        pbf.writeVarintField(1, relation.id);
        writeTags(relation.tags, strings, pbf);
        pbf.writePackedVarint(
          8,
          relation.members.map(({ role }) => strings.add(role)),
        );
        pbf.writePackedSVarint(9, differences(relation.members.map(({ ref }) => ref)));
        pbf.writePackedVarint(
          10,
          relation.members.map(({ type }) => MEMBER_TYPES.indexOf(type)),
        );
      },
      null,
    );
  }
}

function writeTags(tags: Tags, strings: StringTable, pbf: PbfWriter): void {
  pbf.writePackedVarint(
    2,
    Object.keys(tags).map((key) => strings.add(key)),
  );
  pbf.writePackedVarint(
    3,
    Object.values(tags).map((value) => strings.add(value)),
  );
}

const differences = (numbers: readonly number[]): number[] =>
  numbers.map((n, i) => (i === 0 ? n : n - numbers[i - 1]!));
