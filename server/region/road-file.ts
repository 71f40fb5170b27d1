import { open, readFile, stat } from 'node:fs/promises';
import { join } from 'node:path';
import type { BuiltRoads } from '@shared/domain/roads/build-graph';
import type { StoredHierarchy } from '@shared/domain/roads/hierarchy';
import type { RoadGraph } from '@shared/domain/roads/road-graph';
import { UnreadableRegion } from './unreadable-region';

/**
 * The roads of a region in one file, `roads.bin`: eight bytes of magic, the header's length as a 32-bit
 * number, a header in JSON, and then arrays of 32-bit or 8-bit numbers, little-endian, each at a multiple
 * of eight bytes. It is read into memory that threads share, and used as it lies there.
 */
export const ROADS_FILE = 'roads.bin';
const MAGIC = 'THAWROAD';
const FORMAT = 1;

export interface RegionRoads {
  readonly graph: RoadGraph;
  readonly stored: StoredHierarchy;
  /** Road names; the first is none. */
  readonly names: readonly string[];
}

const INTS = [
  'arcTail',
  'arcHead',
  'arcLane',
  'laneMs',
  'laneHead',
  'laneTailFirst',
  'laneTail',
  'segmentDm',
  'segmentName',
  'lineFirst',
  'lineLon',
  'lineLat',
  'upFirst',
  'upHead',
] as const;
const BYTES = ['segmentClass', 'segmentFlags'] as const;

interface Header {
  readonly format: number;
  readonly nodeCount: number;
  readonly segmentCount: number;
  readonly names: readonly string[];
  readonly sections: readonly {
    readonly name: string;
    /** From the end of the header, a multiple of eight. */
    readonly offset: number;
    readonly length: number;
  }[];
}

const padded = (bytes: number): number => Math.ceil(bytes / 8) * 8;

/** @returns the file's size in bytes */
export async function writeRoads(
  folder: string,
  { graph, stored }: BuiltRoads,
  names: readonly string[],
): Promise<number> {
  const arrays = [
    ...INTS.map((name) => [name, { ...graph, ...stored }[name]] as const),
    ...BYTES.map((name) => [name, graph[name]] as const),
  ];
  let offset = 0;
  const sections = arrays.map(([name, array]) => {
    const section = { name, offset, length: array.length };
    offset += padded(array.byteLength);
    return section;
  });
  const header: Header = {
    format: FORMAT,
    nodeCount: graph.nodeCount,
    segmentCount: graph.segmentCount,
    names,
    sections,
  };
  const text = Buffer.from(JSON.stringify(header));
  const begin = padded(MAGIC.length + 4 + text.length);
  const head = Buffer.alloc(begin, ' ');
  head.write(MAGIC);
  head.writeUInt32LE(begin - MAGIC.length - 4, MAGIC.length);
  text.copy(head, MAGIC.length + 4);
  const file = await open(join(folder, ROADS_FILE), 'w');
  try {
    await file.write(head, 0, head.length, 0);
    for (const [i, [, array]] of arrays.entries())
      await file.write(
        new Uint8Array(array.buffer, array.byteOffset, array.byteLength),
        0,
        array.byteLength,
        begin + sections[i]!.offset,
      );
    await file.truncate(begin + offset);
  } finally {
    await file.close();
  }
  return begin + offset;
}

/** Reads a region's roads into memory that threads can share; null for a region that has none. */
export async function readRoadFile(folder: string): Promise<SharedArrayBuffer | null> {
  const path = join(folder, ROADS_FILE);
  // Regions of an earlier importer have no such file.
  const found = await stat(path).catch(() => null);
  if (!found) return null;
  const bytes = await readFile(path);
  const shared = new SharedArrayBuffer(bytes.length);
  new Uint8Array(shared).set(bytes);
  return shared;
}

/**
 * The roads in a file's bytes; nothing is copied.
 *
 * @throws UnreadableRegion when they are damaged
 */
export function roadsIn(file: SharedArrayBuffer | ArrayBuffer): RegionRoads {
  const damaged = new UnreadableRegion('The file of roads is damaged. Import the region again.');
  const bytes = Buffer.from(file as ArrayBuffer);
  if (bytes.length < 16 || bytes.toString('latin1', 0, MAGIC.length) !== MAGIC) throw damaged;
  const begin = MAGIC.length + 4 + bytes.readUInt32LE(MAGIC.length);
  if (begin > bytes.length) throw damaged;
  const header = JSON.parse(bytes.toString('utf8', MAGIC.length + 4, begin)) as Header;
  if (header.format !== FORMAT) throw damaged;
  const section = (name: string): { readonly at: number; readonly length: number } => {
    const found = header.sections.find((one) => one.name === name);
    if (!found || begin + found.offset + found.length > bytes.length) throw damaged;
    return { at: begin + found.offset, length: found.length };
  };
  const ints = (name: (typeof INTS)[number]): Int32Array => {
    const { at, length } = section(name);
    if (at + length * 4 > bytes.length) throw damaged;
    return new Int32Array(file, at, length);
  };
  const small = (name: (typeof BYTES)[number]): Uint8Array => {
    const { at, length } = section(name);
    return new Uint8Array(file, at, length);
  };
  return {
    graph: {
      nodeCount: header.nodeCount,
      segmentCount: header.segmentCount,
      arcTail: ints('arcTail'),
      arcHead: ints('arcHead'),
      arcLane: ints('arcLane'),
      laneMs: ints('laneMs'),
      laneHead: ints('laneHead'),
      laneTailFirst: ints('laneTailFirst'),
      laneTail: ints('laneTail'),
      segmentDm: ints('segmentDm'),
      segmentName: ints('segmentName'),
      lineFirst: ints('lineFirst'),
      lineLon: ints('lineLon'),
      lineLat: ints('lineLat'),
      segmentClass: small('segmentClass'),
      segmentFlags: small('segmentFlags'),
    },
    stored: { upFirst: ints('upFirst'), upHead: ints('upHead') },
    names: header.names,
  };
}
