import { open } from 'node:fs/promises';
import { inflateSync } from 'node:zlib';
import { PbfReader } from 'pbf';
import { UnreadableRegion } from './unreadable-region';

/** Limits that the format sets on a blob's header and its content, in bytes. */
const LARGEST_HEADER = 64 * 1024;
const LARGEST_BLOB = 32 * 1024 * 1024;

export interface OsmBlob {
  readonly type: string;
  readonly content: Uint8Array;
  /** Bytes of the file up to the end of this blob, and of the whole file. */
  readonly offset: number;
  readonly total: number;
}

/** Reads a file, or bytes already in memory, by spans. */
interface ByteSource {
  readonly total: number;
  read(offset: number, length: number): Promise<Uint8Array>;
  close(): Promise<void>;
}

/**
 * The blobs of an `.osm.pbf` file, unpacked one by one, so that a large file never lies in memory
 * as a whole. Format: "PBF Format", OpenStreetMap Wiki.
 */
export async function* osmBlobs(from: string | Uint8Array): AsyncGenerator<OsmBlob> {
  const source = typeof from === 'string' ? await fileSource(from) : memorySource(from);
  try {
    if (source.total === 0) throw new UnreadableRegion('The file is empty.');
    let offset = 0;
    while (offset < source.total) {
      const { type, size, start } = await readHeader(source, offset);
      const body = await whole(source, start, size, offset);
      const content = unpack(body, offset);
      offset = start + size;
      yield { type, content, offset, total: source.total };
    }
  } finally {
    await source.close();
  }
}

async function readHeader(
  source: ByteSource,
  offset: number,
): Promise<{ type: string; size: number; start: number }> {
  const prefix = await whole(source, offset, 4, offset);
  const length = new DataView(prefix.buffer, prefix.byteOffset, 4).getUint32(0);
  if (length === 0 || length > LARGEST_HEADER) {
    throw offset === 0
      ? await notPbf(source)
      : new UnreadableRegion(
          `The file is damaged at byte ${offset}: a block header of ${length} bytes is not allowed. Fetch it again.`,
        );
  }
  const header = { type: '', size: -1 };
  const bytes = await whole(source, offset + 4, length, offset);
  guarded(offset, () =>
    new PbfReader(bytes).readFields((tag, result, pbf) => {
      if (tag === 1) result.type = pbf.readString();
      else if (tag === 3) result.size = pbf.readVarint();
    }, header),
  );
  if (header.type === '' || header.size < 0) {
    throw offset === 0
      ? await notPbf(source)
      : new UnreadableRegion(
          `The file is damaged at byte ${offset}: a block has no type or no size. Fetch it again.`,
        );
  }
  if (header.size > LARGEST_BLOB) {
    throw new UnreadableRegion(
      `The block at byte ${offset} holds ${header.size} bytes; the format allows ${LARGEST_BLOB}.`,
    );
  }
  return { ...header, start: offset + 4 + length };
}

/** What a file that is no extract in this format may be, and what to do with it. */
async function notPbf(source: ByteSource): Promise<UnreadableRegion> {
  const head = Buffer.from(await source.read(0, Math.min(256, source.total)));
  const text = head.toString('latin1').trimStart();
  const begins = (...bytes: number[]): boolean => bytes.every((byte, i) => head[i] === byte);
  if (/^(\u00ef\u00bb\u00bf)?</.test(text))
    return new UnreadableRegion(
      'This is XML and no .osm.pbf file. Turn it into one, for example with: osmium cat in.osm -o out.osm.pbf',
    );
  if (begins(0x1f, 0x8b))
    return new UnreadableRegion(
      'This is packed by gzip and no .osm.pbf file. Unpack it, and if it is XML then turn it into one with: osmium cat in.osm -o out.osm.pbf',
    );
  if (begins(0x42, 0x5a, 0x68) || begins(0x50, 0x4b) || begins(0xfd, 0x37) || begins(0x28, 0xb5))
    return new UnreadableRegion(
      'This is a packed file (.bz2, .zip, .xz or .zst) and no .osm.pbf file. Unpack it first.',
    );
  if (/^[{[]/.test(text))
    return new UnreadableRegion(
      'This is JSON and no .osm.pbf file. Streets come from an OpenStreetMap extract; GeoJSON can be given as the address file beside it.',
    );
  return new UnreadableRegion(
    'This is no .osm.pbf file. Give an OpenStreetMap extract in the PBF format; its name ends in .osm.pbf.',
  );
}

function unpack(body: Uint8Array, offset: number): Uint8Array {
  const blob: {
    raw: Uint8Array | null;
    zlib: Uint8Array | null;
    rawSize: number;
    other: string | null;
  } = {
    raw: null,
    zlib: null,
    rawSize: 0,
    other: null,
  };
  guarded(offset, () =>
    new PbfReader(body).readFields((tag, result, pbf) => {
      if (tag === 1) result.raw = pbf.readBytes();
      else if (tag === 2) result.rawSize = pbf.readVarint();
      else if (tag === 3) result.zlib = pbf.readBytes();
      else if (tag in PACKINGS) result.other = PACKINGS[tag]!;
    }, blob),
  );
  if (blob.other) {
    throw new UnreadableRegion(
      `The file is packed with ${blob.other}, which this importer does not read. Pack it again with zlib, for example with: osmium cat in.osm.pbf -o out.osm.pbf`,
    );
  }
  if (blob.raw) return blob.raw;
  if (!blob.zlib) throw new UnreadableRegion(`The block at byte ${offset} holds no data.`);
  if (blob.rawSize > LARGEST_BLOB) {
    throw new UnreadableRegion(
      `The block at byte ${offset} unpacks to ${blob.rawSize} bytes; the format allows ${LARGEST_BLOB}.`,
    );
  }
  const packed = blob.zlib;
  return guarded(offset, () => inflateSync(packed, { maxOutputLength: LARGEST_BLOB }));
}

const PACKINGS: Readonly<Record<number, string>> = { 4: 'lzma', 5: 'bzip2', 6: 'lz4', 7: 'zstd' };

/** Whatever a decoder throws on bytes that make no sense becomes one clear sentence. */
export function guarded<T>(offset: number, decode: () => T): T {
  try {
    return decode();
  } catch (error) {
    if (error instanceof UnreadableRegion) throw error;
    const reason = error instanceof Error ? error.message : String(error);
    throw new UnreadableRegion(
      `The file is damaged near byte ${offset} (${reason}). Fetch it again.`,
    );
  }
}

async function whole(
  source: ByteSource,
  offset: number,
  length: number,
  block: number,
): Promise<Uint8Array> {
  if (offset + length > source.total) {
    throw new UnreadableRegion(
      `The file ends in the middle of the block at byte ${block}. Fetch it again.`,
    );
  }
  const bytes = await source.read(offset, length);
  if (bytes.length !== length) {
    throw new UnreadableRegion(
      `The file ends in the middle of the block at byte ${block}. Fetch it again.`,
    );
  }
  return bytes;
}

const memorySource = (bytes: Uint8Array): ByteSource => ({
  total: bytes.length,
  read: (offset, length) => Promise.resolve(bytes.subarray(offset, offset + length)),
  close: () => Promise.resolve(),
});

async function fileSource(path: string): Promise<ByteSource> {
  const file = await open(path, 'r').catch((error: unknown) => {
    throw new UnreadableRegion(
      `The file ${path} cannot be opened (${error instanceof Error ? error.message : String(error)}).`,
    );
  });
  const { size } = await file.stat();
  return {
    total: size,
    read: async (offset, length) => {
      const { buffer, bytesRead } = await file.read(new Uint8Array(length), 0, length, offset);
      return buffer.subarray(0, bytesRead);
    },
    close: () => file.close(),
  };
}
