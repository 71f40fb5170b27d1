import { mkdir, readFile, rename, writeFile } from 'node:fs/promises';
import path from 'node:path';

import { withLock } from './lock.mjs';
import { explainFileError } from './problem.mjs';

/** A JSON file's content, or an empty object when there is none yet. */
export async function readJson(file) {
  try {
    return JSON.parse(await readFile(file, 'utf8'));
  } catch (error) {
    // No file yet: the first start.
    if (error.code === 'ENOENT') return {};
    throw explainFileError(error, path.dirname(file));
  }
}

/** Replaces a JSON file in one step, so that a killed run never leaves half of it. Owner-only. */
export async function writeJson(file, content) {
  const folder = path.dirname(file);
  const draft = `${file}.${process.pid}`;
  try {
    await mkdir(folder, { recursive: true });
    const text = `${JSON.stringify(content, null, 2)}\n`;
    await writeFile(draft, text, { mode: 0o600, flush: true });
    await rename(draft, file);
  } catch (error) {
    throw explainFileError(error, folder);
  }
}

/** Changes a JSON file while no other process of this data folder changes it. */
export function updateJson(file, change) {
  return withLock(path.basename(file), async () => writeJson(file, change(await readJson(file))));
}
