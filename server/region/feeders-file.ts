import { readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { gunzip, gzip } from 'node:zlib';
import type { FeederMap } from '@shared/contract/feeders';
import { NO_FEEDERS } from './feeders';

const FEEDERS_FILE = 'feeders.json.gz';

export async function writeFeeders(folder: string, feeders: FeederMap): Promise<void> {
  await writeFile(join(folder, FEEDERS_FILE), await promisify(gzip)(JSON.stringify(feeders)));
}

/** The feeders of an imported region; none for a region that was imported before there were any. */
export async function readFeeders(folder: string): Promise<FeederMap> {
  let file: Buffer;
  try {
    file = await readFile(join(folder, FEEDERS_FILE));
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return NO_FEEDERS;
    throw error;
  }
  return JSON.parse((await promisify(gunzip)(file)).toString('utf8')) as FeederMap;
}
