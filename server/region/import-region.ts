import { createHash, type Hash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { takeAddressFile } from './address-file/take-address-file';
import { bookOf, ownAddresses, townFinder, type AddressPoint } from './address-points';
import { inWords } from './disk-trouble';
import { leftOutOf } from './left-out';
import { feedersOf } from './feeders';
import { writeFeeders } from './feeders-file';
import { MAX_ZOOM, mapLayers, MIN_ZOOM, roadClassOf } from './map-layers';
import { readExtract } from './osm-extract';
import {
  MANIFEST_FILE,
  readManifest,
  REPORT_FILE,
  writeAddressBook,
  type LeftOut,
  type RegionCounts,
  type RegionManifest,
  type RegionReport,
} from './region-data';
import type { AddressFile, ImportStep, MakingStep, RegionMaking } from './region-making';
import { roadKilometres } from './road-kilometres';
import { ROADS_STEP } from './road-step';
import { UnreadableRegion } from './unreadable-region';
import { dropAbandoned, openWorkshop, settleWorkshop } from './workshop';
import { ADDRESS_ZOOM, writeAddressTiles, writeTiles } from './write-tiles';

/** Part of every region's hash: raise it when the same file would give other files. */
export const IMPORTER_VERSION = 6;

const READING_WEIGHT = 15;

/** In this order: a step may use what those before it have left in the making. */
const STEPS: readonly MakingStep[] = [
  {
    name: 'addresses',
    weight: 15,
    run: async (making) => {
      const { extract, addressFile } = making;
      const townAt = townFinder(extract);
      let addresses: readonly AddressPoint[] = ownAddresses(extract, townAt);
      if (addressFile) {
        const taken = await takeAddressFile(addressFile.path, addresses, extract.bbox, townAt);
        addresses = taken.addresses;
        making.addressFileReport = taken.report;
      }
      const book = bookOf(extract, addresses, townAt);
      making.book = book;
      for (const one of leftOutOf(extract)) making.leaveOut(one);
      await writeAddressBook(making.folder, book);
      return {
        addresses: book.addresses.length,
        streets: book.streets.length,
        corners: book.corners.length,
        places: book.places.length,
        roadKm: roadKilometres(making.extract),
      };
    },
  },
  {
    name: 'feeders',
    weight: 1,
    run: async ({ extract, book, folder }) => {
      const power = feedersOf(extract, book.addresses);
      await writeFeeders(folder, power);
      return { feeders: power.feeders.length };
    },
  },
  ROADS_STEP,
  {
    name: 'map',
    weight: 60,
    run: (making, tell) => {
      const layers = mapLayers(making.extract);
      making.hasCoastline = layers.hasCoastline;
      return writeTiles(layers, making.extract.bbox, making.folder, tell);
    },
  },
  {
    name: 'house numbers',
    weight: 10,
    run: ({ book, folder }) => writeAddressTiles(book.addresses, join(folder, 'addr')),
  },
];

export interface RegionImport {
  /** An `.osm.pbf` file's path, or its bytes. */
  readonly pbf: string | Uint8Array;
  /** The folder that holds all regions; the new one becomes `<id>-<hash>` in it. */
  readonly outFolder: string;
  readonly name: string;
  readonly timeZone: string;
  readonly attribution: string;
  readonly addressFile?: AddressFile | null;
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
 * Makes a region from OpenStreetMap data. The work is done in a folder of its own that takes its
 * final name when all is complete, so a region is there wholly or not at all; a region that is there
 * already is used as it is.
 *
 * @throws UnreadableRegion when the file cannot be used
 */
export async function importRegion(order: RegionImport): Promise<ImportedRegion> {
  const { outFolder, name } = order;
  const id = idOf(name);
  const hash = await hashOf(order);
  const folder = join(outFolder, `${id}-${hash}`);
  const existing = await readManifest(folder);
  if (existing) return { manifest: existing, folder };

  await dropAbandoned(outFolder);
  const workshop = await openWorkshop(outFolder);
  try {
    const { making, counts, report } = await runSteps(order, workshop);
    const [west, south, east, north] = making.extract.bbox;
    const manifest: RegionManifest = {
      id,
      name,
      hash,
      importer: IMPORTER_VERSION,
      origin: order.origin ?? null,
      bbox: making.extract.bbox,
      centre: [(west + east) / 2, (south + north) / 2],
      timeZone: order.timeZone,
      attribution: attributionOf(order),
      hasCoastline: making.hasCoastline,
      minZoom: MIN_ZOOM,
      maxZoom: MAX_ZOOM,
      addressZoom: ADDRESS_ZOOM,
      counts,
    };
    await writeFile(join(workshop, REPORT_FILE), `${JSON.stringify(report)}\n`);
    await writeFile(join(workshop, MANIFEST_FILE), `${JSON.stringify(manifest, null, 2)}\n`);
    await settleWorkshop(workshop, folder);
    order.onProgress?.({ step: 'done', share: 1 });
    return { manifest, folder };
  } catch (error) {
    await rm(workshop, { recursive: true, force: true });
    throw inWords(error);
  }
}

async function runSteps(
  order: RegionImport,
  workshop: string,
): Promise<{ making: RegionMaking; counts: RegionCounts; report: RegionReport }> {
  const began = performance.now();
  const total = STEPS.reduce((sum, { weight }) => sum + weight, READING_WEIGHT);
  const tell = (step: ImportStep['step'], weightDone: number): void =>
    order.onProgress?.({ step, share: weightDone / total });
  const timed: { step: string; seconds: number }[] = [];
  const leftOut: LeftOut[] = [];

  tell('reading', 0);
  const extract = await readExtract(order.pbf, (share) => tell('reading', share * READING_WEIGHT));
  if (![...extract.ways.values()].some(({ tags }) => roadClassOf(tags) !== null))
    throw new UnreadableRegion(
      'The extract holds no roads. Take one that holds all of a county, not only its addresses or buildings.',
    );
  timed.push({ step: 'reading', seconds: secondsSince(began) });

  const making: RegionMaking = {
    folder: workshop,
    extract,
    addressFile: order.addressFile ?? null,
    book: { addresses: [], streets: [], corners: [], places: [] },
    hasCoastline: false,
    addressFileReport: null,
    leaveOut: (one) => void leftOut.push(one),
  };
  const counts = { ...NO_COUNTS };
  let done = READING_WEIGHT;
  for (const { name, weight, run } of STEPS) {
    const start = performance.now();
    tell(name, done);
    const counted = await run(making, (share) => tell(name, done + share * weight));
    for (const [key, count] of Object.entries(counted)) counts[key as keyof RegionCounts] += count;
    done += weight;
    timed.push({ step: name, seconds: secondsSince(start) });
  }
  const report: RegionReport = {
    seconds: secondsSince(began),
    peakMegabytes: Math.round((process.resourceUsage().maxRSS * 1024) / 1e6),
    steps: timed,
    leftOut,
    addressFile: making.addressFileReport,
  };
  return { making, counts, report };
}

const NO_COUNTS: RegionCounts = {
  addresses: 0,
  streets: 0,
  corners: 0,
  places: 0,
  roadKm: 0,
  roadNodes: 0,
  roadEdges: 0,
  feeders: 0,
  tiles: 0,
  bytes: 0,
};

const secondsSince = (start: number): number => Math.round((performance.now() - start) / 10) / 100;

const attributionOf = ({ attribution, addressFile }: RegionImport): string =>
  [attribution, addressFile?.attribution ?? ''].filter((text) => text !== '').join('; ');

export function idOf(name: string): string {
  const id = name
    .normalize('NFKD')
    .toLowerCase()
    .replace(/[^a-z0-9]+/g, '-')
    .replace(/^-|-$/g, '');
  return id === '' ? 'region' : id;
}

/** Names what a region is made from: the files' bytes and all that the importer is told with them. */
async function hashOf(order: RegionImport): Promise<string> {
  const { pbf, timeZone, addressFile } = order;
  const hash = createHash('sha256').update(
    JSON.stringify([IMPORTER_VERSION, timeZone, attributionOf(order)]),
  );
  if (typeof pbf === 'string') await hashFile(hash, pbf);
  else hash.update(pbf);
  if (addressFile) await hashFile(hash, addressFile.path);
  return hash.digest('hex').slice(0, 12);
}

async function hashFile(hash: Hash, path: string): Promise<void> {
  try {
    for await (const chunk of createReadStream(path)) hash.update(chunk as Buffer);
  } catch (error) {
    throw new UnreadableRegion(
      `The file ${path} cannot be read (${error instanceof Error ? error.message : String(error)}).`,
    );
  }
}
