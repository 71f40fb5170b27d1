import { readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { gunzipSync, gzipSync } from 'node:zlib';
import type {
  AddressBook,
  AddressPoint,
  NamedStreet,
  PlaceName,
  StreetCorner,
} from './address-points';
import type { LonLat } from './osm-extract';

/** What a region's folder says about itself, in `region.json`. */
export interface RegionManifest {
  readonly id: string;
  readonly name: string;
  /** Of the source data and this importer's version; also the end of the folder's name. */
  readonly hash: string;
  /** What the data was made from, when it was generated; null for imported files. */
  readonly origin: string | null;
  readonly bbox: readonly [west: number, south: number, east: number, north: number];
  readonly centre: LonLat;
  /** IANA name of the zone in which times are shown. */
  readonly timeZone: string;
  readonly attribution: string;
  /** Whether the map's ground is sea with land drawn on it, or land. */
  readonly hasCoastline: boolean;
  readonly minZoom: number;
  readonly maxZoom: number;
  /** Zoom of the house-number tiles under `addr/`. */
  readonly addressZoom: number;
  /** Version of the importer that made it; another version's files may not be readable. */
  readonly importer: number;
  readonly counts: RegionCounts;
}

export interface RegionCounts {
  readonly addresses: number;
  readonly streets: number;
  readonly corners: number;
  readonly places: number;
  /** Length of all roads that are drawn, each carriageway once, in kilometres. */
  readonly roadKm: number;
  /** Junctions of the road graph, those with turn restrictions once for each way in. */
  readonly roadNodes: number;
  /** Stretches from junction to junction, each direction and each way in counted. */
  readonly roadEdges: number;
  /** Circuits of the power company, as far as the data tells of them. */
  readonly feeders: number;
  readonly tiles: number;
  /** Size of the tiles, packed. */
  readonly bytes: number;
}

/** What an import did not take over. */
export interface LeftOut {
  readonly what: string;
  readonly count: number;
  readonly why: string;
}

/** How an import went; kept beside the manifest for the result page. */
export interface RegionReport {
  readonly seconds: number;
  /** Largest memory that the importing process held, in megabytes (10^6 bytes). */
  readonly peakMegabytes: number;
  readonly steps: readonly { readonly step: string; readonly seconds: number }[];
  readonly leftOut: readonly LeftOut[];
  readonly addressFile: AddressFileReport | null;
}

export interface AddressFileReport {
  readonly rows: number;
  /** Points that the extract did not have. */
  readonly added: number;
  /** Rows for a point that the extract or an earlier row had. */
  readonly merged: number;
  /** Rows of a flat that were folded into their building's point. */
  readonly unitRows: number;
  /** Points whose missing city was filled in. */
  readonly citiesFilled: number;
  readonly rejectedCount: number;
  /** How many were rejected for each reason. */
  readonly reasons: Readonly<Record<string, number>>;
  /** The first of them, with the line of the file on which each begins or ends. */
  readonly rejected: readonly { readonly line: number; readonly reason: string }[];
}

export const MANIFEST_FILE = 'region.json';
export const REPORT_FILE = 'report.json';
const ADDRESS_FILE = 'addresses.json.gz';

/** Column by column: half the size of row by row, and quicker to read. */
interface PackedBook {
  readonly strings: string[];
  readonly addresses: {
    number: string[];
    street: number[];
    city: number[];
    postcode: number[];
    flats: number[];
    lon: number[];
    lat: number[];
  };
  readonly streets: { name: number[]; city: number[]; lon: number[]; lat: number[] };
  readonly corners: {
    first: number[];
    second: number[];
    city: number[];
    lon: number[];
    lat: number[];
  };
  readonly places: { name: number[]; kind: number[]; city: number[]; lon: number[]; lat: number[] };
}

const packed = (degrees: number): number => Math.round(degrees * 1e7);

export async function writeAddressBook(folder: string, book: AddressBook): Promise<void> {
  const strings: string[] = [];
  const known = new Map<string, number>();
  const number = (text: string): number => {
    const found = known.get(text);
    if (found !== undefined) return found;
    known.set(text, strings.length);
    return strings.push(text) - 1;
  };
  const places = <T extends { readonly at: LonLat }>(
    items: readonly T[],
  ): { lon: number[]; lat: number[] } => ({
    lon: items.map(({ at }) => packed(at[0])),
    lat: items.map(({ at }) => packed(at[1])),
  });
  const { addresses, streets, corners } = book;
  const content: PackedBook = {
    addresses: {
      number: addresses.map((a) => a.number),
      street: addresses.map((a) => number(a.street)),
      city: addresses.map((a) => number(a.city)),
      postcode: addresses.map((a) => number(a.postcode)),
      flats: addresses.map((a) => a.flats),
      ...places(addresses),
    },
    streets: {
      name: streets.map((s) => number(s.name)),
      city: streets.map((s) => number(s.city)),
      ...places(streets),
    },
    corners: {
      first: corners.map((c) => number(c.first)),
      second: corners.map((c) => number(c.second)),
      city: corners.map((c) => number(c.city)),
      ...places(corners),
    },
    places: {
      name: book.places.map((p) => number(p.name)),
      kind: book.places.map((p) => number(p.kind)),
      city: book.places.map((p) => number(p.city)),
      ...places(book.places),
    },
    strings,
  };
  await writeFile(join(folder, ADDRESS_FILE), gzipSync(JSON.stringify(content)));
}

/** The addresses, streets, corners and places of an imported region. */
export async function readAddressBook(folder: string): Promise<AddressBook> {
  const file = await readFile(join(folder, ADDRESS_FILE));
  const content = JSON.parse(gunzipSync(file).toString('utf8')) as PackedBook;
  const text = (numbers: readonly number[], i: number): string =>
    content.strings[numbers[i]!] ?? '';
  const at = ({ lon, lat }: { lon: number[]; lat: number[] }, i: number): LonLat => [
    lon[i]! / 1e7,
    lat[i]! / 1e7,
  ];
  const { addresses, streets, corners, places } = content;
  return {
    addresses: addresses.number.map((number, i): AddressPoint => ({
      at: at(addresses, i),
      number,
      street: text(addresses.street, i),
      city: text(addresses.city, i),
      postcode: text(addresses.postcode, i),
      flats: addresses.flats[i] ?? 1,
    })),
    streets: streets.name.map((_, i): NamedStreet => ({
      name: text(streets.name, i),
      city: text(streets.city, i),
      at: at(streets, i),
    })),
    corners: corners.first.map((_, i): StreetCorner => ({
      first: text(corners.first, i),
      second: text(corners.second, i),
      city: text(corners.city, i),
      at: at(corners, i),
    })),
    places: places.name.map((_, i): PlaceName => ({
      name: text(places.name, i),
      kind: text(places.kind, i),
      city: text(places.city, i),
      at: at(places, i),
    })),
  };
}

export async function readManifest(folder: string): Promise<RegionManifest | null> {
  // No manifest means no complete region here: an import that was cut short, or another folder.
  const text = await readFile(join(folder, MANIFEST_FILE), 'utf8').catch(() => null);
  return text === null ? null : (JSON.parse(text) as RegionManifest);
}

export async function readReport(folder: string): Promise<RegionReport | null> {
  const text = await readFile(join(folder, REPORT_FILE), 'utf8').catch(() => null);
  return text === null ? null : (JSON.parse(text) as RegionReport);
}
