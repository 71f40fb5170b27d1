/**
 * For commands that are programs of the server's build and need no database: sets up what is missing and
 * runs the program in this process. Standard output is the program's alone; standard error says something
 * only when there is something to do or to complain about.
 */
import { createRequire } from 'node:module';
import path from 'node:path';

import { ensureDataFolder } from './data-folder.mjs';
import { ensureNode } from './node-version.mjs';
import { ensurePackages } from './packages.mjs';
import { root } from './paths.mjs';
import { runMain } from './problem.mjs';
import { ensureServerBuild } from './product-build.mjs';

/**
 * @param file the built program, without its ending
 * @param run gets what the program exports and the arguments, and gives the exit code
 */
export const runBuiltProgram = (file, run) =>
  runMain(async () => {
    ensureNode();
    await ensureDataFolder();
    await ensurePackages((text) => process.stderr.write(`  packages  ${text}\n`));
    const built = await ensureServerBuild();
    if (built !== 'up to date') process.stderr.write(`  build     ${built}\n`);

    process.setSourceMapsEnabled(true);
    const load = createRequire(import.meta.url);
    return run(load(path.join(root, 'dist', 'server', `${file}.js`)), process.argv.slice(2));
  });
