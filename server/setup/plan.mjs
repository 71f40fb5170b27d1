/**
 * `npm run plan`: plans routes for other programs; problems in, plans out (server/plan-program). It sets up what
 * it needs. Standard output carries plans and nothing else, and standard error says something only
 * when there is something to do or to complain about.
 */
import { createRequire } from 'node:module';
import path from 'node:path';

import { ensureDataFolder } from './data-folder.mjs';
import { ensureNode } from './node-version.mjs';
import { ensurePackages } from './packages.mjs';
import { root } from './paths.mjs';
import { runMain } from './problem.mjs';
import { ensureServerBuild } from './product-build.mjs';

await runMain(async () => {
  ensureNode();
  await ensureDataFolder();
  await ensurePackages((text) => process.stderr.write(`  packages  ${text}\n`));
  const built = await ensureServerBuild();
  if (built !== 'up to date') process.stderr.write(`  build     ${built}\n`);

  process.setSourceMapsEnabled(true);
  const load = createRequire(import.meta.url);
  const { planProgram } = load(path.join(root, 'dist', 'server', 'plan-cli.js'));
  return planProgram(process.argv.slice(2));
});
