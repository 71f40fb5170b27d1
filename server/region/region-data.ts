import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { LonLat } from './osm-extract';

export { readAddressBook, writeAddressBook } from './address-store';

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

export async function readManifest(folder: string): Promise<RegionManifest | null> {
  // No manifest means no complete region here: an import that was cut short, or another folder.
  const text = await readFile(join(folder, MANIFEST_FILE), 'utf8').catch(() => null);
  return text === null ? null : (JSON.parse(text) as RegionManifest);
}

export async function readReport(folder: string): Promise<RegionReport | null> {
  const text = await readFile(join(folder, REPORT_FILE), 'utf8').catch(() => null);
  return text === null ? null : (JSON.parse(text) as RegionReport);
}
