import { readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { writeCounty } from './county/write-county';
import { importRegion, IMPORTER_VERSION, type ImportedRegion } from './import-region';
import type { ImportStep } from './region-making';
import { readManifest } from './region-data';

export const DEMO_SEED = 1;

/**
 * Names the generator's output, so that a later start need not generate it to know that it has it.
 * A test compares it with what the generator gives, and fails until both agree.
 */
export const DEMO_DATA = '17976c366e1f';

/** Says of a region that it is the demo county as it is generated now. */
export const DEMO_ORIGIN = `county ${DEMO_SEED} ${DEMO_DATA}`;

const DEMO_NAME = 'Skerry County';
/** The company's setting; the county itself lies in no country. */
const DEMO_TIME_ZONE = 'America/New_York';

/**
 * Makes the demo county's region unless it is there.
 *
 * @param countyPbf the county, from whoever has it already: making it takes seconds
 */
export async function ensureDemoRegion(
  tilesFolder: string,
  onProgress?: (step: ImportStep) => void,
  countyPbf: () => Uint8Array = () => writeCounty({ seed: DEMO_SEED }),
): Promise<ImportedRegion> {
  const existing = await findRegion(
    tilesFolder,
    ({ manifest }) => manifest.origin === DEMO_ORIGIN && manifest.importer === IMPORTER_VERSION,
  );
  if (existing) return existing;
  return importRegion({
    pbf: countyPbf(),
    outFolder: tilesFolder,
    name: DEMO_NAME,
    timeZone: DEMO_TIME_ZONE,
    attribution: 'Skerry County is invented',
    origin: DEMO_ORIGIN,
    ...(onProgress ? { onProgress } : {}),
  });
}

/** All complete regions in a folder, by folder name. */
export async function listRegions(tilesFolder: string): Promise<ImportedRegion[]> {
  // A folder that does not exist yet holds no regions.
  const entries = await readdir(tilesFolder).catch(() => []);
  const regions: ImportedRegion[] = [];
  for (const entry of entries.sort()) {
    if (entry.startsWith('.')) continue;
    const folder = join(tilesFolder, entry);
    const manifest = await readManifest(folder);
    if (manifest) regions.push({ manifest, folder });
  }
  return regions;
}

async function findRegion(
  tilesFolder: string,
  isWanted: (region: ImportedRegion) => boolean,
): Promise<ImportedRegion | null> {
  return (await listRegions(tilesFolder)).find(isWanted) ?? null;
}
