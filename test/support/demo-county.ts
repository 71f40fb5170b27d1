import { createHash } from 'node:crypto';
import { cpSync, mkdirSync, readdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { writeCounty } from '../../server/region/county/write-county';
import { DEMO_SEED, ensureDemoRegion } from '../../server/region/demo-region';
import type { ImportedRegion } from '../../server/region/import-region';

const GENERATOR = 'server/region/county';
const OTHERS = ['server/region/osm-pbf-writer.ts', 'server/region/demo-region.ts'];
const KEPT = '.data/test-county';

/**
 * The demo county as OpenStreetMap data. Making it takes seconds, so the first spec that asks keeps it for
 * the others, under a name that changes with the generator; `region-county.spec` makes it anew.
 */
export function demoCountyPbf(): Uint8Array {
  const sources = readdirSync(GENERATOR).map((file) => path.join(GENERATOR, file));
  const hash = createHash('sha256');
  for (const file of [...sources.sort(), ...OTHERS]) hash.update(readFileSync(file));
  const file = path.join(KEPT, `${hash.digest('hex').slice(0, 16)}.osm.pbf`);
  try {
    return new Uint8Array(readFileSync(file));
  } catch {
    const made = writeCounty({ seed: DEMO_SEED });
    mkdirSync(KEPT, { recursive: true });
    // Another worker may be at the same: whoever renames last leaves the same bytes.
    const own = `${file}.${String(process.pid)}`;
    writeFileSync(own, made);
    renameSync(own, file);
    return made;
  }
}

/** The demo region in a folder of regions of its own, copied from the one that all share. */
export async function demoRegionIn(folder: string): Promise<ImportedRegion> {
  const { folder: shared } = await ensureDemoRegion(path.resolve('tiles'));
  cpSync(shared, path.join(folder, path.basename(shared)), { recursive: true });
  return ensureDemoRegion(folder);
}
