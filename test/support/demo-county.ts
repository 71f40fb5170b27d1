import { createHash } from 'node:crypto';
import {
  cpSync,
  existsSync,
  mkdirSync,
  readdirSync,
  readFileSync,
  renameSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import path from 'node:path';
import { writeCounty } from '../../server/region/county/write-county';
import { DEMO_SEED, ensureDemoRegion } from '../../server/region/demo-region';
import type { ImportedRegion } from '../../server/region/import-region';
import type { ImportStep } from '../../server/region/region-making';

const GENERATOR = 'server/region/county';
const OTHERS = ['server/region/osm-pbf-writer.ts', 'server/region/demo-region.ts'];
const KEPT = '.data/test-county';

const SHARED_TILES = path.resolve('tiles');

/** Where the county is kept between specs, under a name that changes with the generator. */
function keptFile(): string {
  const sources = readdirSync(GENERATOR).map((file) => path.join(GENERATOR, file));
  const hash = createHash('sha256');
  for (const file of [...sources.sort(), ...OTHERS]) hash.update(readFileSync(file));
  return path.join(KEPT, `${hash.digest('hex').slice(0, 16)}.osm.pbf`);
}

/**
 * The demo county as OpenStreetMap data. Making it takes seconds, so whoever has made it keeps it for the
 * others: `region-county.spec`, which makes it anew in any case and comes first, else the first that asks.
 */
export function demoCountyPbf(): Uint8Array {
  try {
    return new Uint8Array(readFileSync(keptFile()));
  } catch {
    const made = writeCounty({ seed: DEMO_SEED });
    keepDemoCounty(made);
    return made;
  }
}

export function keepDemoCounty(made: Uint8Array): void {
  const file = keptFile();
  mkdirSync(KEPT, { recursive: true });
  // Another worker may be at the same: whoever renames last leaves the same bytes.
  const own = `${file}.${String(process.pid)}`;
  writeFileSync(own, made);
  renameSync(own, file);
}

/** The demo region in a folder of regions. */
export const demoRegion = (
  folder = SHARED_TILES,
  onProgress?: (step: ImportStep) => void,
): Promise<ImportedRegion> => ensureDemoRegion(folder, onProgress, demoCountyPbf);

/** Hands a demo region that was made elsewhere to those that use the shared one. */
export function keepDemoRegion({ folder }: ImportedRegion): void {
  const place = path.join(SHARED_TILES, path.basename(folder));
  if (existsSync(place)) return;
  // Half a region must not be found; a name with a dot is none.
  const own = path.join(SHARED_TILES, `.${path.basename(folder)}-${String(process.pid)}`);
  cpSync(folder, own, { recursive: true });
  try {
    renameSync(own, place);
  } catch {
    // Somebody else was quicker with the same.
    rmSync(own, { recursive: true, force: true });
  }
}

/** The demo region in a folder of regions of its own, copied from the one that all share. */
export async function demoRegionIn(folder: string): Promise<ImportedRegion> {
  const { folder: shared } = await demoRegion();
  cpSync(shared, path.join(folder, path.basename(shared)), { recursive: true });
  return demoRegion(folder);
}
