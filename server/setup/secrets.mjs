import { randomBytes } from 'node:crypto';
import path from 'node:path';

import { readJson, writeJson } from './json-file.mjs';
import { withLock } from './lock.mjs';
import { dataFolder } from './paths.mjs';

const SECRETS_FILE = path.join(dataFolder, 'secrets.json');

/** What is generated, once; hex, so that no shell, SQL or URL has to quote it. */
const GENERATED = {
  databasePassword: () => randomBytes(24).toString('hex'),
  databaseRootPassword: () => randomBytes(24).toString('hex'),
  sessionSecret: () => randomBytes(32).toString('hex'),
  // The shape that the text service's own identifiers have: two letters and 32 hex digits.
  textAccount: () => `AC${randomBytes(16).toString('hex')}`,
  textToken: () => randomBytes(16).toString('hex'),
};

/** The secrets of this data folder; those that are missing are made and kept, readable by the owner only. */
export function readSecrets() {
  return withLock('secrets', async () => {
    const known = await readJson(SECRETS_FILE);
    const missing = Object.keys(GENERATED).filter((name) => !known[name]);
    if (missing.length === 0) return known;

    const secrets = { ...known };
    for (const name of missing) secrets[name] = GENERATED[name]();
    await writeJson(SECRETS_FILE, secrets);
    return secrets;
  });
}
