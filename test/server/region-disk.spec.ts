import { execFileSync } from 'node:child_process';
import { mkdirSync, readdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import type { Refusal } from '@shared/domain/errors';
import { RegionFiles } from '../../server/region/region-files';
import { importRegion } from '../../server/region/import-region';
import { demoCountyPbf } from '../support/demo-county';
import { hamletPbf } from '../support/hamlet';
import { importerProgram, type ImporterProgram } from '../support/importer-program';
import { temporaryFolder } from '../support/region-files';

const folder = temporaryFolder();
const small = join(folder.path, 'small');

/** A disk of two megabytes; null where this user may mount none. */
function smallDisk(): (() => void) | null {
  mkdirSync(small);
  try {
    execFileSync('mount', ['-t', 'tmpfs', '-o', 'size=2m', 'tmpfs', small], { stdio: 'ignore' });
    return () => void execFileSync('umount', [small]);
  } catch {
    // Not root, or in a container without that right: the test says that it is skipped.
    return null;
  }
}

const unmount = smallDisk();
let program: ImporterProgram;
beforeAll(async () => (program = await importerProgram('disk')));
afterAll(() => {
  unmount?.();
  program.remove();
  folder.remove();
});

(unmount ? describe : describe.skip)('a full disk (needs the right to mount one)', () => {
  const full = /disk is full.*Make room/;

  it('ends an import in words, leaves nothing, and lets the next one go on', async () => {
    const pbf = join(folder.path, 'county.osm.pbf');
    writeFileSync(pbf, demoCountyPbf());
    const order = { name: 'County', timeZone: 'UTC', attribution: 'invented' };
    const running = program.port.start(
      { ...order, pbf, outFolder: join(small, 'tiles') },
      () => undefined,
    );
    await expect(running.key).rejects.toThrow(full);
    expect(readdirSync(join(small, 'tiles'))).toEqual([]);
    const next = { ...order, pbf: hamletPbf(), outFolder: join(folder.path, 'tiles') };
    expect((await importRegion(next)).manifest.counts.tiles).toBeGreaterThan(0);
  });

  it('refuses a file that has no room, and leaves nothing of it', async () => {
    const files = new RegionFiles({
      dataFolder: small,
      regionFilesFolder: small,
      mostRegionUploadBytes: 1e9,
    });
    const chunks = Array.from({ length: 60 }, () => Buffer.alloc(65_536, 1));
    const taken = files.take(Readable.from(chunks), 'big.osm.pbf', 60 * 65_536);
    await expect(taken).rejects.toThrow(full);
    await expect(taken).rejects.toMatchObject({ code: 'no-room' } satisfies Partial<Refusal>);
    expect(readdirSync(join(small, 'region-uploads'))).toEqual([]);
  });
});
