import { createReadStream } from 'node:fs';
import { parse } from 'csv-parse';
import { UnreadableRegion } from '../unreadable-region';
import { cellsOf, columnsAmong, lackOf, type AddressCells, type Columns } from './address-columns';
import { jsonObjects } from './json-objects';

/** One row as it stands in the file, or why it cannot be read. */
export type FileRow =
  | { readonly line: number; readonly cells: AddressCells }
  | { readonly line: number; readonly reason: string };

/** Enough to see what a file is. */
const SNIFF_CHARS = 65_536;

/**
 * The rows of an address file, one by one: CSV with a header (comma, semicolon or tab), GeoJSON as a
 * FeatureCollection, or GeoJSON features one to a line. UTF-8, with or without a byte order mark.
 *
 * @throws UnreadableRegion with a sentence for the person who gave the file
 */
export async function* readAddressFile(path: string): AsyncGenerator<FileRow> {
  const chunks = textOf(path);
  const first = await firstOf(chunks);
  const begin = first.trimStart();
  if (begin === '') throw new UnreadableRegion('The address file is empty.');
  const rest = withFirst(first, chunks);
  if (begin.startsWith('{')) yield* readFeatures(rest, begin);
  else if (begin.startsWith('[') || begin.startsWith('<') || begin.includes('\0'))
    throw new UnreadableRegion(
      'The address file is neither CSV nor GeoJSON. Give a CSV with the columns LON, LAT, NUMBER, STREET, UNIT, CITY, POSTCODE, or a GeoJSON of points.',
    );
  else yield* readTable(rest, begin);
}

async function* textOf(path: string): AsyncGenerator<string> {
  const decoder = new TextDecoder('utf-8', { fatal: true });
  try {
    for await (const bytes of createReadStream(path, { highWaterMark: 256 * 1024 })) {
      const text = decoder.decode(bytes as Buffer, { stream: true });
      if (text !== '') yield text;
    }
    const text = decoder.decode();
    if (text !== '') yield text;
  } catch (error) {
    if ((error as { code?: unknown }).code === 'ERR_ENCODING_INVALID_ENCODED_DATA')
      throw new UnreadableRegion(
        'The address file is not written in UTF-8. Save or export it as UTF-8; if it is packed (.zip, .gz), unpack it first.',
      );
    throw new UnreadableRegion(
      `The address file cannot be read (${error instanceof Error ? error.message : String(error)}).`,
    );
  }
}

async function firstOf(chunks: AsyncGenerator<string>): Promise<string> {
  let text = '';
  while (text.length < SNIFF_CHARS) {
    const next = await chunks.next();
    if (next.done) break;
    text += next.value;
  }
  return text;
}

async function* withFirst(first: string, rest: AsyncGenerator<string>): AsyncGenerator<string> {
  yield first;
  yield* rest;
}

async function* readTable(chunks: AsyncIterable<string>, begin: string): AsyncGenerator<FileRow> {
  const header = begin.split(/\r?\n/, 1)[0] ?? '';
  const delimiter = [',', ';', '\t', '|'].reduce((best, mark) =>
    header.split(mark).length > header.split(best).length ? mark : best,
  );
  const parser = parse({
    delimiter,
    relax_column_count: true,
    relax_quotes: true,
    skip_empty_lines: true,
    info: true,
    max_record_size: 100_000,
  });
  const fed = feed(chunks, parser);
  let columns: Columns | null = null;
  let index = new Map<string, number>();
  try {
    for await (const { record, info } of parser as AsyncIterable<{
      record: string[];
      info: { lines: number };
    }>) {
      if (columns) {
        yield {
          line: info.lines,
          cells: cellsOf(columns, (name) => record[index.get(name) ?? -1] ?? ''),
        };
        continue;
      }
      const headers = record.map((name) => name.trim());
      columns = columnsAmong(headers);
      index = new Map(headers.map((name, i) => [name, i]));
      const lack = lackOf(columns, false);
      if (lack)
        throw new UnreadableRegion(
          `The address file has no column for ${lack}. Its columns are: ${headers.join(', ').slice(0, 300)}.`,
        );
    }
    await fed;
  } catch (error) {
    parser.destroy();
    // The feeder ends with the parser; what it says then is no news.
    await fed.catch(() => undefined);
    if (error instanceof UnreadableRegion) throw error;
    throw new UnreadableRegion(
      `The address file cannot be read as a table (${error instanceof Error ? error.message : String(error)}).`,
    );
  }
}

/** Writes into the parser no faster than it reads, so that the file is never held as a whole. */
async function feed(
  chunks: AsyncIterable<string>,
  parser: ReturnType<typeof parse>,
): Promise<void> {
  try {
    for await (const chunk of chunks) {
      if (parser.destroyed) return;
      if (!parser.write(chunk))
        await new Promise<void>((resolve) => {
          parser.once('drain', resolve);
          parser.once('close', resolve);
        });
    }
    parser.end();
  } catch (error) {
    parser.destroy(error instanceof Error ? error : new Error(String(error)));
    throw error;
  }
}

/** RFC 7946, section 4: all GeoJSON is WGS 84; older files may name another system. */
const OTHER_SYSTEM = /"crs"\s*:\s*\{[^}]*"name"\s*:\s*"([^"]*)"/;

async function* readFeatures(
  chunks: AsyncIterable<string>,
  begin: string,
): AsyncGenerator<FileRow> {
  const system = OTHER_SYSTEM.exec(begin)?.[1];
  if (system !== undefined && !/CRS84|4326|WGS\s*84/i.test(system))
    throw new UnreadableRegion(`The address file is in the system "${system}". ${TO_DEGREES}`);
  const isCollection = /"type"\s*:\s*"FeatureCollection"/.test(begin);
  for await (const { text, line } of jsonObjects(chunks, isCollection ? 2 : 0))
    yield readFeature(text, line);
}

/** What to do with coordinates that are no degrees. */
export const TO_DEGREES =
  'Convert it to degrees (WGS 84) first, for example with: ogr2ogr -t_srs EPSG:4326 addresses.geojson in.shp';

interface Feature {
  readonly properties?: Readonly<Record<string, unknown>> | null;
  readonly geometry?: { readonly type?: unknown; readonly coordinates?: unknown } | null;
}

function readFeature(text: string, line: number): FileRow {
  let feature: Feature;
  try {
    feature = JSON.parse(text) as Feature;
  } catch {
    return { line, reason: 'it is no JSON' };
  }
  const properties = feature.properties ?? {};
  const columns = columnsAmong(Object.keys(properties));
  const cells = cellsOf(columns, (name) => wordsOf(properties[name]));
  const { geometry } = feature;
  if (!geometry) return { line, cells };
  const coordinates: unknown = geometry.coordinates;
  if (geometry.type !== 'Point' || !Array.isArray(coordinates))
    return { line, reason: `its shape is ${wordsOf(geometry.type) || 'unknown'}, not a point` };
  return { line, cells: { ...cells, lon: wordsOf(coordinates[0]), lat: wordsOf(coordinates[1]) } };
}

const wordsOf = (value: unknown): string =>
  typeof value === 'string' || typeof value === 'number' ? String(value) : '';
