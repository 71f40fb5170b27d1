/**
 * `npm run region -- import FILE.osm.pbf …`: makes and switches regions from the command line. It builds
 * what it needs, and starts the database if nothing has started it yet.
 */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import path from 'node:path';

import { ensureDataFolder } from './data-folder.mjs';
import { serverEnvironment, usesOwnDatabase } from './environment.mjs';
import { ensureMariadb, SERVERS, stopMariadb } from './mariadb.mjs';
import { ensureNode } from './node-version.mjs';
import { ensurePackages } from './packages.mjs';
import { root } from './paths.mjs';
import { runMain } from './problem.mjs';
import { ensureServerBuild } from './product-build.mjs';
import { readSecrets } from './secrets.mjs';
import { stepPrinter } from './steps.mjs';

/** The command line serves nobody; the port is the server's usual one, for the checks of its settings. */
const PORT = Number(process.env.THAWLINE_PORT) || 4310;

const { step } = stepPrinter(process.stderr);

await runMain(async () => {
  ensureNode();
  await ensureDataFolder();
  await step('packages', ensurePackages);
  await step('build', ensureServerBuild);
  let stopDatabase = async () => {};
  const database = usesOwnDatabase()
    ? null
    : await step('database', async (tell) => {
        const { started, ...found } = await ensureMariadb(SERVERS.product, tell);
        if (started) stopDatabase = () => stopMariadb(SERVERS.product);
        return {
          text: `MariaDB on ${found.host}:${found.port}`,
          value: { ...found, name: SERVERS.product.database },
        };
      });
  try {
    const env = serverEnvironment({
      port: PORT,
      fakesPort: null,
      database,
      secrets: await readSecrets(),
    });
    const program = spawn(
      process.execPath,
      [
        '--enable-source-maps',
        path.join(root, 'dist', 'server', 'region-cli.js'),
        ...process.argv.slice(2),
      ],
      { stdio: 'inherit', env: { ...process.env, ...env } },
    );
    // Ctrl-C reaches the program too; this script waits for it, so that the database is stopped after it.
    for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
      process.on(signal, () => program.kill(signal));
    }
    const [code] = await once(program, 'exit');
    return code ?? 130;
  } finally {
    await stopDatabase();
  }
});
