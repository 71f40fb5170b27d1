import type { ChildProcess } from 'node:child_process';
import { mkdirSync, readdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import { createRegionImporter, type RegionImporterPort } from '../../server/region/region-importer';
import { bundleProgram } from './bundle-program';

const ROOT = path.resolve(__dirname, '../..');

export interface ImporterProgram {
  readonly port: RegionImporterPort;
  /** Ends the process that imports, as an out-of-memory killer would. */
  kill(): void;
  /** Resolves when an import has begun to write into that folder. */
  atWork(tiles: string): Promise<void>;
  remove(): void;
}

/** The importer in a process of its own, as the server runs it. */
export async function importerProgram(name: string): Promise<ImporterProgram> {
  // Inside the repository, so that the bundle finds its packages.
  const folder = path.join(ROOT, '.data', `importer-program-${String(process.pid)}-${name}`);
  const program = path.join(folder, 'import-program.cjs');
  mkdirSync(folder, { recursive: true });
  await bundleProgram('server/region/import-program.ts', program);
  let running: ChildProcess | null = null;
  return {
    port: createRegionImporter(program, (child) => (running = child)),
    kill: () => void running?.kill('SIGKILL'),
    atWork: async (tiles) => {
      const isWriting = (): boolean =>
        readdirSync(tiles).some(
          (entry) =>
            entry.startsWith('.making-') && readdirSync(path.join(tiles, entry)).length > 1,
        );
      while (!isWriting()) await new Promise((resolve) => setTimeout(resolve, 20));
    },
    remove: () => rmSync(folder, { recursive: true, force: true }),
  };
}
