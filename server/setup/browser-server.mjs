/**
 * The product as one worker of the browser stories needs it: built, on an empty database of its own,
 * with the demo county and the fake text service. Runs until it is told to stop.
 *
 *   node server/setup/browser-server.mjs <worker, from 0> <port>
 */
import { mkdir } from 'node:fs/promises';
import path from 'node:path';

import { serverEnvironment } from './environment.mjs';
import { dataFolder, root } from './paths.mjs';
import { runMain } from './problem.mjs';
import { ensureBuild } from './product-build.mjs';
import { startAndWait, stopLeftovers, stopProcess } from './processes.mjs';
import { readSecrets } from './secrets.mjs';
import { recreateDatabase, testDatabase } from './test-database.mjs';

const START_SECONDS = 180;

const [worker, port] = process.argv.slice(2).map(Number);
const purpose = `browser-${worker}`;

const pids = [];
const stop = async () => {
  for (const pid of pids.reverse()) await stopProcess(pid);
};
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
  process.once(signal, () => void stop().finally(() => process.exit(0)));
}

await runMain(async () => {
  try {
    await serve();
  } finally {
    await stop();
  }
});

async function serve() {
  await stopLeftovers(purpose);
  await ensureBuild();
  const database = await testDatabase();
  const name = `thawline_test_browser_${worker}`;
  await recreateDatabase(database, name);
  const data = path.join(dataFolder, purpose);
  await mkdir(data, { recursive: true });

  const env = {
    ...serverEnvironment({
      port,
      fakesPort: port + 1,
      database: { ...database, name },
      secrets: await readSecrets(),
    }),
    THAWLINE_ENVIRONMENT: 'test',
    THAWLINE_DATA_FOLDER: data,
    THAWLINE_TILES_FOLDER: process.env.THAWLINE_TILES_FOLDER || path.join(root, 'tiles'),
  };
  const start = (name, at, answers) =>
    startAndWait(name, purpose, env, `http://127.0.0.1:${at}${answers}`, START_SECONDS, (pid) =>
      pids.push(pid),
    );
  const fakes = await start('fakes-main', port + 1, '/');
  const server = await start('main', port, '/readyz');
  await Promise.race([fakes.ended, server.ended]);
}
