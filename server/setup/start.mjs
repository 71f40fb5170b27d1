/**
 * `npm start`: from a fresh clone to a running product on a demo storm, in one command. Every step is
 * skipped when its work is done already. Ctrl-C stops what runs, in order.
 */
import { rm } from 'node:fs/promises';
import path from 'node:path';

import { ensureDataFolder } from './data-folder.mjs';
import { serverEnvironment, usesFakeTexts, usesOwnDatabase } from './environment.mjs';
import { readJson, writeJson } from './json-file.mjs';
import { tryLock } from './lock.mjs';
import { ensureMariadb, SERVERS, stopMariadb } from './mariadb.mjs';
import { ensureNode } from './node-version.mjs';
import { ensurePackages } from './packages.mjs';
import { dataFolder, shown } from './paths.mjs';
import { isPortFree, nextFreePort } from './ports.mjs';
import { runMain, SetupProblem } from './problem.mjs';
import { ensureBuild } from './product-build.mjs';
import { startAndWait, stopLeftovers, stopProcess } from './processes.mjs';
import { readSecrets } from './secrets.mjs';
import { stepPrinter } from './steps.mjs';

const DEFAULT_PORT = 4310;
const FAKES_SECONDS = 30;
/** The first start also makes the demo county. */
const SERVER_SECONDS = 300;
const RUNNING_FILE = path.join(dataFolder, 'running.json');

const { say, step } = stepPrinter();
/** What this run has to stop, last started first stopped. */
const stops = [];
let stopping = null;

function stopAll() {
  stopping ??= (async () => {
    for (const stop of stops.reverse()) await stop();
  })();
  return stopping;
}

function stopAndExit() {
  if (!stopping) say('\n  stopping');
  void stopAll().then(
    () => process.exit(0),
    (error) => {
      process.stderr.write(`${error.message}\n`);
      process.exit(1);
    },
  );
}

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, stopAndExit);
if (process.env.npm_lifecycle_event) {
  // A supervisor's signal ends npm and its shell, which do not pass it on: then our parent changes.
  const parent = process.ppid;
  setInterval(() => process.ppid !== parent && stopAndExit(), 500).unref();
}

await runMain(async () => {
  try {
    return await start();
  } finally {
    await stopAll();
  }
});

async function start() {
  say();
  await step('node', () => ensureNode());
  await ensureDataFolder();
  const release = await tryLock('start');
  if (!release) {
    const { address } = await readJson(RUNNING_FILE);
    throw new SetupProblem(
      `Thawline is starting or running from this folder already${address ? `, at ${address}` : ''}. Stop that one first (Ctrl-C in its window).`,
    );
  }

  const leftovers = await stopLeftovers('start');
  if (leftovers) say(`stopped ${leftovers} program(s) that an earlier run had left`);
  const port = await ourPort();
  const ownDatabase = usesOwnDatabase();

  await step('packages', ensurePackages);
  const database = ownDatabase ? null : await step('database', startDatabase);
  await step('build', ensureBuild);

  const fakesPort = usesFakeTexts() ? await nextFreePort(port + 1) : null;
  const env = serverEnvironment({ port, fakesPort, database, secrets: await readSecrets() });
  if (fakesPort) await step('texts', () => run('fakes-main', env, fakesPort, '/', FAKES_SECONDS));
  const server = await step('server', () => run('main', env, port, '/readyz', SERVER_SECONDS));

  await announce(env, fakesPort, server);
  const code = await server.ended;
  if (stopping) return 0;
  throw new SetupProblem(
    `The server ended by itself (exit code ${code}); see ${shown(server.logFile)}.`,
  );
}

async function ourPort() {
  const port = Number(process.env.THAWLINE_PORT || DEFAULT_PORT);
  if (!Number.isInteger(port) || port < 1 || port > 65_535) {
    throw new SetupProblem('THAWLINE_PORT must be a whole number from 1 to 65535.');
  }
  if (await isPortFree(port, process.env.THAWLINE_HOST || '127.0.0.1')) return port;
  throw new SetupProblem(
    port < 1024
      ? `Port ${port} is taken, or this user may not open it. Choose another one: THAWLINE_PORT=4320 npm start`
      : `Port ${port} is taken by another program. Choose another one: THAWLINE_PORT=${port + 10} npm start`,
  );
}

async function startDatabase(tell) {
  // Also one that a killed run left: it is this folder's own, and nobody else uses it.
  stops.push(() => stopMariadb(SERVERS.product));
  const { port, started, ...rest } = await ensureMariadb(SERVERS.product, tell);
  const text = `MariaDB ${started ? 'started' : 'runs already'} on 127.0.0.1:${port}`;
  return { text, value: { ...rest, port, name: SERVERS.product.database } };
}

async function run(name, env, port, path, seconds) {
  const host =
    process.env.THAWLINE_HOST && name === 'main' ? process.env.THAWLINE_HOST : '127.0.0.1';
  const reachable = host === '0.0.0.0' || host === '::' ? '127.0.0.1' : host;
  const program = await startAndWait(
    name,
    'start',
    env,
    `http://${reachable}:${port}${path}`,
    seconds,
    (pid) => stops.push(() => stopProcess(pid)),
  );
  return { text: `runs on ${host}:${port}`, value: program };
}

async function announce(env, fakesPort, server) {
  await writeJson(RUNNING_FILE, { address: env.THAWLINE_PUBLIC_URL });
  stops.push(() => rm(RUNNING_FILE, { force: true }));
  say();
  say(`Thawline is at ${env.THAWLINE_PUBLIC_URL}`);
  if (fakesPort) say(`Texts go to nobody; read them at http://127.0.0.1:${fakesPort}`);
  const signIns = await readJson(path.join(dataFolder, 'demo-sign-ins.json'));
  if (Array.isArray(signIns) && signIns.length > 0) {
    say();
    for (const { role, name, email, password } of signIns) {
      say(
        `${String(role).padEnd(12)} ${String(email).padEnd(34)} ${String(password).padEnd(26)} ${name}`,
      );
    }
  }
  say();
  say(`Log: ${shown(server.logFile)}. Ctrl-C stops everything.`);
}
