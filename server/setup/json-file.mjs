import { mkdir, open, readFile, rename } from 'node:fs/promises';
import path from 'node:path';

import { withLock } from './lock.mjs';

/** A JSON file's content, or an empty object when there is none yet. */
export async function readJson(file) {
  try {
    return JSON.parse(await readFile(file, 'utf8'));
  } catch (error) {
    // No file yet: the first start.
    if (error.code === 'ENOENT') return {};
    throw error;
  }
}

/** Replaces a JSON file in one step, so that a killed run never leaves half of it. Owner-only. */
export async function writeJson(file, content) {
  await mkdir(path.dirname(file), { recursive: true });
  const draft = `${file}.${process.pid}`;
  const handle = await open(draft, 'w', 0o600);
  try {
    await handle.writeFile(`${JSON.stringify(content, null, 2)}\n`);
    await handle.sync();
  } finally {
    await handle.close();
  }
  await rename(draft, file);
}

/** Changes a JSON file while no other process of this data folder changes it. */
export function updateJson(file, change) {
  return withLock(path.basename(file), async () => writeJson(file, change(await readJson(file))));
}
