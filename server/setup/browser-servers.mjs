/**
 * The product as each worker of the browser stories needs it: built, on an empty database of its own,
 * with the demo county and the fake text service one port above it. All start at once, since each start
 * keeps one core busy; when all answer it says `all serve`, and runs until it is told to stop.
 *
 *   node server/setup/browser-servers.mjs <workers> <first port>
 */
import { mkdir } from 'node:fs/promises';
import path from 'node:path';

import { serverEnvironment } from './environment.mjs';
import { dataFolder, root } from './paths.mjs';
import { isPortFree } from './ports.mjs';
import { runMain, SetupProblem } from './problem.mjs';
import { ensureBuild } from './product-build.mjs';
import { startAndWait, stopLeftovers, stopProcess } from './processes.mjs';
import { readSecrets } from './secrets.mjs';
import { recreateDatabase, testDatabase } from './test-database.mjs';

const START_SECONDS = 180;

const [workers, firstPort] = process.argv.slice(2).map(Number);

const pids = [];
const stop = async () => {
  for (const pid of pids.reverse()) await stopProcess(pid);
};
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
  process.once(signal, () => void stop().finally(() => process.exit(0)));
}

await runMain(async () => {
  try {
    await ensureBuild();
    const database = await testDatabase();
    const places = Array.from({ length: workers }, (_, worker) => [worker, firstPort + 2 * worker]);
    const serving = await Promise.all(
      places.map(([worker, port]) => serve(worker, port, database)),
    );
    process.stdout.write('all serve\n');
    await Promise.race(serving.flat().map(({ ended }) => ended));
  } finally {
    await stop();
  }
});

/** The product of one worker, once it answers. */
async function serve(worker, port, database) {
  const purpose = `browser-${worker}`;
  await stopLeftovers(purpose);
  // Else somebody else's answer would pass for that of the product.
  for (const wanted of [port, port + 1])
    if (!(await isPortFree(wanted))) throw new SetupProblem(`Port ${wanted} is taken.`);
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
  return [fakes, server];
}
