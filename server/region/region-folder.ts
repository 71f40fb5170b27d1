import { randomUUID } from 'node:crypto';
import { rename, rm } from 'node:fs/promises';
import { basename, join } from 'node:path';
import { listRegions } from './demo-region';
import { IMPORTER_VERSION, type ImportedRegion } from './import-region';
import { readManifest } from './region-data';

export const keyOf = ({ folder }: ImportedRegion): string => basename(folder);

/** Whether this version can open it: what an earlier importer made may lie in other files. */
export const isReadable = ({ manifest }: ImportedRegion): boolean =>
  manifest.importer === IMPORTER_VERSION;

/** The region of that key; null when it is not there, or only half. */
export async function findRegion(tilesFolder: string, key: string): Promise<ImportedRegion | null> {
  if (key !== basename(key) || key.startsWith('.')) return null;
  const folder = join(tilesFolder, key);
  const manifest = await readManifest(folder);
  return manifest && { manifest, folder };
}

/** The regions that this version can open. */
export const readableRegions = async (tilesFolder: string): Promise<ImportedRegion[]> =>
  (await listRegions(tilesFolder)).filter(isReadable);

/** It is gone at once, though its many files take a while: the name is taken first. */
export async function removeRegionFolder(tilesFolder: string, key: string): Promise<void> {
  const doomed = join(tilesFolder, `.making-${randomUUID()}`);
  await rename(join(tilesFolder, key), doomed);
  await rm(doomed, { recursive: true, force: true });
}
