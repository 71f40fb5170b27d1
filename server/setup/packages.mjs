import { createHash } from 'node:crypto';
import { access, constants, readFile, writeFile } from 'node:fs/promises';
import path from 'node:path';

import { withLock } from './lock.mjs';
import { root } from './paths.mjs';
import { explainFileError, SetupProblem } from './problem.mjs';
import { lastLines, run } from './run.mjs';

const STAMP_FILE = path.join(root, 'node_modules', '.thawline-packages');

/**
 * Installs the packages of package-lock.json unless exactly those are installed already.
 *
 * @returns what was done, for the step's line
 */
export function ensurePackages(tell = () => {}) {
  return withLock('packages', async () => {
    const lockFile = await readFile(path.join(root, 'package-lock.json'));
    const wanted = createHash('sha256').update(lockFile).digest('hex');
    // No stamp: never installed, or a killed installation.
    const installed = await readFile(STAMP_FILE, 'utf8').catch(() => '');
    if (installed === wanted) return 'installed already';
    if (await areInstalled(JSON.parse(lockFile))) {
      // By somebody's own npm install or npm ci.
      await writeFile(STAMP_FILE, wanted);
      return 'installed already';
    }

    try {
      await access(root, constants.W_OK);
    } catch (error) {
      throw explainFileError(error, root);
    }
    tell('installing from the npm registry (a minute or two the first time)');
    const { code, output } = await run('npm', ['ci', '--include=dev', '--no-audit', '--no-fund']);
    if (code !== 0) throw explainNpm(output);
    await writeFile(STAMP_FILE, wanted);
    return 'installed';
  });
}

/** Whether npm's own record, which it writes when an installation is complete, holds the same versions. */
async function areInstalled(lock) {
  const record = await readFile(path.join(root, 'node_modules', '.package-lock.json'), 'utf8').then(
    JSON.parse,
    () => null,
  );
  if (!record) return false;
  return Object.entries(lock.packages).every(([place, wanted]) => {
    if (place === '') return true;
    const found = record.packages[place];
    return found ? found.version === wanted.version : Boolean(wanted.optional);
  });
}

function explainNpm(output) {
  const end = lastLines(output, 6);
  if (/ENOTFOUND|EAI_AGAIN|ECONNREFUSED|ETIMEDOUT|ENETUNREACH/.test(output)) {
    return new SetupProblem(
      `The npm registry cannot be reached. Check the network (npm config get registry), then try again; npm said:\n${end}`,
    );
  }
  if (/EACCES|EROFS/.test(output)) {
    return new SetupProblem(
      `npm may not write to ${root}. Make the folder writable for this user, then try again; npm said:\n${end}`,
    );
  }
  return new SetupProblem(`npm could not install the packages; it said:\n${end}`);
}
