import { createHash, randomUUID } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { mkdir, readdir, rename, rm, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { addressBookOf } from './address-points';
import { MAX_ZOOM, mapLayers, MIN_ZOOM } from './map-layers';
import { readExtract } from './osm-extract';
import { MANIFEST_FILE, readManifest, writeAddressBook, type RegionManifest } from './region-data';
import { UnreadableRegion } from './unreadable-region';
import { ADDRESS_ZOOM, writeAddressTiles, writeTiles } from './write-tiles';

/** Part of every region's hash: raise it when the same file would give other tiles or addresses. */
const IMPORTER_VERSION = 2;

export interface ImportStep {
  readonly step: 'reading' | 'sorting' | 'tiles' | 'addresses' | 'done';
  /** Share of the whole import that is done, 0 to 1. */
  readonly share: number;
}

export interface RegionImport {
  /** An `.osm.pbf` file's path, or its bytes. */
  readonly pbf: string | Uint8Array;
  /** The folder that holds all regions; the new one becomes `<id>-<hash>` in it. */
  readonly outFolder: string;
  readonly name: string;
  readonly timeZone: string;
  readonly attribution: string;
  readonly origin?: string;
  readonly onProgress?: (step: ImportStep) => void;
}

export interface ImportedRegion {
  readonly manifest: RegionManifest;
  readonly folder: string;
}

/** Attribution that OpenStreetMap data must carry wherever it is shown (ODbL 1.0, section 4.3). */
export const OSM_ATTRIBUTION = '© OpenStreetMap contributors';

/**
 * Makes tiles and an address book from OpenStreetMap data. The work is done in a folder of its own
 * that takes its final name when all is complete, so a region is there wholly or not at all; a
 * region that is there already is used as it is.
 *
 * @throws UnreadableRegion when the file cannot be used
 */
export async function importRegion(order: RegionImport): Promise<ImportedRegion> {
  const { outFolder, name, timeZone, attribution, onProgress } = order;
  const id = idOf(name);
  const hash = await hashOf(order);
  const folder = join(outFolder, `${id}-${hash}`);
  const existing = await readManifest(folder);
  if (existing) return { manifest: existing, folder };

  await mkdir(outFolder, { recursive: true });
  await dropAbandoned(outFolder);
  const workshop = join(outFolder, `.making-${id}-${randomUUID()}`);
  await mkdir(workshop);
  try {
    const extract = await readExtract(order.pbf, (share) =>
      onProgress?.({ step: 'reading', share: share * 0.2 }),
    );
    if (extract.ways.size === 0) throw new UnreadableRegion('The file holds no streets.');
    onProgress?.({ step: 'sorting', share: 0.2 });
    const layers = mapLayers(extract);
    const book = addressBookOf(extract);
    const base = await writeTiles(layers, extract.bbox, workshop, (share) =>
      onProgress?.({ step: 'tiles', share: 0.3 + share * 0.5 }),
    );
    onProgress?.({ step: 'addresses', share: 0.85 });
    const numbers = await writeAddressTiles(book.addresses, join(workshop, 'addr'));
    await writeAddressBook(workshop, book);
    const [west, south, east, north] = extract.bbox;
    const manifest: RegionManifest = {
      id,
      name,
      hash,
      origin: order.origin ?? null,
      bbox: extract.bbox,
      centre: [(west + east) / 2, (south + north) / 2],
      timeZone,
      attribution,
      hasCoastline: layers.hasCoastline,
      minZoom: MIN_ZOOM,
      maxZoom: MAX_ZOOM,
      addressZoom: ADDRESS_ZOOM,
      counts: {
        addresses: book.addresses.length,
        streets: book.streets.length,
        corners: book.corners.length,
        places: book.places.length,
        tiles: base.tiles + numbers.tiles,
        bytes: base.bytes + numbers.bytes,
      },
    };
    await writeFile(join(workshop, MANIFEST_FILE), `${JSON.stringify(manifest, null, 2)}\n`);
    await settle(workshop, folder);
    onProgress?.({ step: 'done', share: 1 });
    return { manifest, folder };
  } catch (error) {
    await rm(workshop, { recursive: true, force: true });
    throw error;
  }
}

/** Gives the finished folder its name; when another import was quicker, its folder stays. */
async function settle(workshop: string, folder: string): Promise<void> {
  try {
    await rename(workshop, folder);
  } catch (error) {
    if (!(await readManifest(folder))) throw error;
    await rm(workshop, { recursive: true, force: true });
  }
}

/** Folders that killed imports left behind. An import takes minutes, so an hour is safe. */
async function dropAbandoned(outFolder: string): Promise<void> {
  const hourAgo = Date.now() - 3_600_000;
  for (const entry of await readdir(outFolder)) {
    if (!entry.startsWith('.making-')) continue;
    const path = join(outFolder, entry);
    const { mtimeMs } = await stat(path);
    if (mtimeMs < hourAgo) await rm(path, { recursive: true, force: true });
  }
}

export function idOf(name: string): string {
  const id = name
    .normalize('NFKD')
    .toLowerCase()
    .replace(/[^a-z0-9]+/g, '-')
    .replace(/^-|-$/g, '');
  return id === '' ? 'region' : id;
}

async function hashOf({ pbf, timeZone, attribution }: RegionImport): Promise<string> {
  const hash = createHash('sha256').update(
    JSON.stringify([IMPORTER_VERSION, timeZone, attribution]),
  );
  if (typeof pbf !== 'string') return hash.update(pbf).digest('hex').slice(0, 12);
  try {
    for await (const chunk of createReadStream(pbf)) hash.update(chunk as Buffer);
  } catch (error) {
    throw new UnreadableRegion(
      `The file ${pbf} cannot be read (${error instanceof Error ? error.message : String(error)}).`,
    );
  }
  return hash.digest('hex').slice(0, 12);
}
