import { readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { AddressBook } from './address-points';
import { unpackAddressBook, type AddressTable } from './address-table';
import { packAddressBook } from './pack-addresses';
import { UnreadableRegion } from './unreadable-region';

const ADDRESS_FILE = 'addresses.bin';
/** Raised when the file's form changes. */
const FORM = 1;
const MARK = 0x54484144;

/**
 * The file is a header of 12 bytes (mark, form, length of the description), a description in JSON
 * with the texts and where each column lies, and the columns as the memory holds them, each at a
 * multiple of eight bytes: it is used as it is read, without being taken apart. Little-endian.
 */
interface Description {
  readonly strings: readonly string[];
  readonly columns: readonly (readonly [group: string, name: string, kind: Kind, length: number])[];
}

const KINDS = {
  u8: Uint8Array,
  u16: Uint16Array,
  u32: Uint32Array,
  i32: Int32Array,
} as const;
type Kind = keyof typeof KINDS;
type Column = Uint8Array | Uint16Array | Uint32Array | Int32Array;

export async function writeAddressBook(folder: string, book: AddressBook): Promise<void> {
  await writeFile(join(folder, ADDRESS_FILE), bytesOf(packAddressBook(book)));
}

/** The addresses, streets, corners and places of an imported region. */
export async function readAddressBook(folder: string): Promise<AddressBook> {
  return unpackAddressBook(await readAddressTable(folder));
}

/** @throws UnreadableRegion when the file was made by another version or is cut short */
export async function readAddressTable(folder: string): Promise<AddressTable> {
  return tableIn(await readFile(join(folder, ADDRESS_FILE)));
}

const padded = (length: number): number => Math.ceil(length / 8) * 8;

export function bytesOf(table: AddressTable): Uint8Array {
  const { strings, ...groups } = table;
  const found = Object.entries(groups).flatMap(([group, columns]) =>
    Object.entries(columns as Record<string, Column>).map(
      ([name, data]) => ({ group, name, data }) as const,
    ),
  );
  const description: Description = {
    strings,
    columns: found.map(({ group, name, data }) => [group, name, kindOf(data), data.length]),
  };
  const text = new TextEncoder().encode(JSON.stringify(description));
  let size = padded(12 + text.length);
  const offsets = found.map(({ data }) => {
    const offset = size;
    size += padded(data.byteLength);
    return offset;
  });
  const bytes = new Uint8Array(size);
  new Uint32Array(bytes.buffer, 0, 3).set([MARK, FORM, text.length]);
  bytes.set(text, 12);
  found.forEach(({ data }, i) => {
    bytes.set(new Uint8Array(data.buffer, data.byteOffset, data.byteLength), offsets[i]);
  });
  return bytes;
}

const kindOf = (data: Column): Kind =>
  (Object.keys(KINDS) as Kind[]).find((kind) => data instanceof KINDS[kind])!;

export function tableIn(file: Uint8Array): AddressTable {
  // Columns are views of the memory, so it must begin at a multiple of their size.
  const isAligned = file.byteOffset % 8 === 0 && file.buffer instanceof ArrayBuffer;
  const bytes = isAligned ? (file as Uint8Array<ArrayBuffer>) : Uint8Array.from(file);
  if (bytes.length < 12) throw new UnreadableRegion('The address file is cut short.');
  const [mark, form, length] = new Uint32Array(bytes.buffer, bytes.byteOffset, 3);
  if (mark !== MARK || form !== FORM)
    throw new UnreadableRegion('The address file was made by another version; import it again.');
  if (bytes.length < 12 + length!) throw new UnreadableRegion('The address file is cut short.');
  const text = new TextDecoder().decode(bytes.subarray(12, 12 + length!));
  const { strings, columns } = JSON.parse(text) as Description;
  const table: Record<string, Record<string, Column>> = {};
  let offset = padded(12 + length!);
  for (const [group, name, kind, count] of columns) {
    const Kind = KINDS[kind];
    if (offset + count * Kind.BYTES_PER_ELEMENT > bytes.length)
      throw new UnreadableRegion('The address file is cut short.');
    (table[group] ??= {})[name] = new Kind(bytes.buffer, bytes.byteOffset + offset, count);
    offset += padded(count * Kind.BYTES_PER_ELEMENT);
  }
  return { strings, ...table } as unknown as AddressTable;
}
