import { access, constants, mkdir } from 'node:fs/promises';

import { dataFolder } from './paths.mjs';
import { explainFileError } from './problem.mjs';

/** Makes the data folder, and says in a sentence when this user cannot write there. */
export async function ensureDataFolder() {
  try {
    await mkdir(dataFolder, { recursive: true, mode: 0o700 });
    await access(dataFolder, constants.W_OK | constants.X_OK);
  } catch (error) {
    throw explainFileError(error, dataFolder);
  }
}
