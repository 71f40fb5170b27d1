import { spawn } from 'node:child_process';
import { chmod, mkdir, open, readFile, rm, writeFile } from 'node:fs/promises';
import net from 'node:net';
import os from 'node:os';
import path from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';

import { findProgram, installPackages } from './debian.mjs';
import { readJson, updateJson } from './json-file.mjs';
import { withLock } from './lock.mjs';
import { accountsFile, settingsFile } from './mariadb-settings.mjs';
import { dataFolder, shortName, shown } from './paths.mjs';
import { nextFreePort } from './ports.mjs';
import { explainFileError, SetupProblem } from './problem.mjs';
import { findProcesses, isAlive } from './processes.mjs';
import { lastLines, run } from './run.mjs';
import { readSecrets } from './secrets.mjs';

const STATE_FILE = path.join(dataFolder, 'state.json');
const START_SECONDS = 90;
const STOP_SECONDS = 30;
/** A Unix socket's path holds 107 characters; a deep checkout needs more. */
const SOCKET_PATH_LIMIT = 100;

/**
 * The private servers: the product's, which loses nothing; the tests', which never waits for the disk;
 * and the benches', which is measured with the product's settings and on databases of its own.
 */
export const SERVERS = {
  product: { name: 'mariadb', firstPort: 3316, fast: false, database: 'thawline' },
  tests: { name: 'mariadb-test', firstPort: 3317, fast: true, testPrefix: 'thawline_test' },
  bench: { name: 'mariadb-bench', firstPort: 3318, fast: false, testPrefix: 'thawline_test' },
};

/**
 * Makes sure that a private server runs: finds or installs MariaDB, creates the data folder, re-uses
 * the server that an earlier run left, else starts one. Several processes may call this at once.
 *
 * @param tell called with a line before something that takes long
 * @returns how to connect, and whether this call started the server
 */
export async function ensureMariadb(server, tell = () => {}) {
  const mariadbd = await findOrInstall(tell);
  const secrets = await readSecrets();

  return withLock(server.name, async () => {
    const place = await prepareFolder(server);
    const state = await readJson(STATE_FILE);
    const connection = (port) => ({
      host: '127.0.0.1',
      port,
      user: 'thawline',
      password: secrets.databasePassword,
      socket: place.socket,
    });

    const running = await runningPid(place);
    if (running) {
      const port = await portInSettings(place);
      await waitUntilReady(port, place, () => isAlive(running));
      return { ...connection(port), started: false };
    }

    if (!(await hasTables(place))) {
      tell('creating the database folder');
      await install(place);
    }
    const port = await nextFreePort(state[server.name]?.port ?? server.firstPort);
    const pid = await start(mariadbd, server, place, port, secrets);
    await updateJson(STATE_FILE, (known) => ({
      ...known,
      [server.name]: { port, socket: place.socket },
    }));
    await waitUntilReady(port, place, () => isAlive(pid));
    return { ...connection(port), started: true };
  });
}

/** Stops a private server and waits until it has gone. Returns false when none ran. */
export async function stopMariadb(server) {
  const place = placeOf(server);
  const pid = await runningPid(place);
  if (!pid) return false;
  process.kill(pid, 'SIGTERM');
  // Never killed by force: it may have much to write, and a slow stop is better than a recovery.
  for (let waited = 0; waited < STOP_SECONDS * 1000; waited += 50) {
    if (!isAlive(pid)) return true;
    await sleep(50);
  }
  throw new SetupProblem(
    `MariaDB (process ${pid}) did not stop within ${STOP_SECONDS} s; see ${shown(place.log)}.`,
  );
}

function placeOf(server) {
  const folder = path.join(dataFolder, server.name);
  const near = path.join(folder, 'mariadbd.sock');
  const far = path.join(
    os.tmpdir(),
    `thawline-${process.getuid?.() ?? 0}-${shortName(folder)}`,
    'mariadbd.sock',
  );
  return {
    folder,
    rows: path.join(folder, 'data'),
    settings: path.join(folder, 'my.cnf'),
    accounts: path.join(folder, 'accounts.sql'),
    pid: path.join(folder, 'mariadbd.pid'),
    log: path.join(folder, 'mariadbd.log'),
    socket: near.length <= SOCKET_PATH_LIMIT ? near : far,
  };
}

async function prepareFolder(server) {
  const place = placeOf(server);
  try {
    await mkdir(place.folder, { recursive: true, mode: 0o700 });
    await mkdir(path.dirname(place.socket), { recursive: true, mode: 0o700 });
    await chmod(path.dirname(place.socket), 0o700);
  } catch (error) {
    throw explainFileError(error, dataFolder);
  }
  return place;
}

async function findOrInstall(tell) {
  const names = ['mariadbd', 'mysqld'];
  const found = await findProgram(...names);
  if (found && (await findProgram('mariadb-install-db'))) return found;
  tell('installing MariaDB from Debian packages');
  // The core packages hold the programs but no system service, so nothing starts on port 3306.
  await installPackages('MariaDB', ['mariadb-server-core', 'mariadb-client-core']);
  const installed = await findProgram(...names);
  if (!installed)
    throw new SetupProblem('MariaDB was installed, but the program mariadbd is not to be found.');
  return installed;
}

/** A finished installation has this table's folder and our mark; a killed one has no mark and starts over. */
async function hasTables(place) {
  try {
    await readFile(path.join(place.folder, 'installed'));
    return true;
  } catch (error) {
    if (error.code === 'ENOENT') return false;
    throw explainFileError(error, place.folder);
  }
}

async function install(place) {
  await rm(place.rows, { recursive: true, force: true });
  const program = await findProgram('mariadb-install-db');
  const { code, output } = await run(program, [
    '--no-defaults',
    `--datadir=${place.rows}`,
    '--auth-root-authentication-method=normal',
    '--skip-test-db',
    ...asRoot(),
  ]);
  if (code !== 0) {
    throw new SetupProblem(
      `MariaDB could not create its folder ${shown(place.rows)}; it said:\n${lastLines(output, 8)}`,
    );
  }
  await writeFile(path.join(place.folder, 'installed'), '');
}

/** mariadbd refuses to run as root unless it is told so. */
const asRoot = () => (process.getuid?.() === 0 ? ['--user=root'] : []);

async function start(mariadbd, server, place, port, secrets) {
  const user = process.getuid?.() === 0 ? 'root' : null;
  await writeFile(place.settings, settingsFile(place, { port, user, fast: server.fast }), {
    mode: 0o600,
  });
  await writeFile(place.accounts, accountsFile(secrets, server), { mode: 0o600 });

  const log = await open(place.log, 'a', 0o600);
  const child = spawn(mariadbd, [`--defaults-file=${place.settings}`], {
    cwd: place.folder,
    detached: true,
    stdio: ['ignore', log.fd, log.fd],
  });
  child.unref();
  await log.close();
  return child.pid;
}

/** The process id of this folder's server, or null. */
async function runningPid(place) {
  const [pid] = await findProcesses(`--defaults-file=${place.settings}\0`);
  return pid ?? null;
}

/** The port that the settings of a running server give. */
async function portInSettings(place) {
  const [, port] = /^port = (\d+)$/m.exec(await readFile(place.settings, 'utf8')) ?? [];
  return Number(port);
}

/** Ready is the first byte of the server's greeting: it greets nobody before the accounts are made. */
async function waitUntilReady(port, place, alive) {
  for (let waited = 0; waited < START_SECONDS * 1000; waited += 50) {
    if (await greets(port)) return;
    if (!alive()) break;
    await sleep(50);
  }
  const log = await readFile(place.log, 'utf8').catch(() => '');
  throw new SetupProblem(
    `MariaDB did not start. The end of ${shown(place.log)}:\n${lastLines(log, 8)}`,
  );
}

function greets(port) {
  return new Promise((resolve) => {
    const socket = net.connect(port, '127.0.0.1');
    const answer = (isReady) => {
      socket.destroy();
      resolve(isReady);
    };
    socket.setTimeout(1000, () => answer(false));
    socket.once('data', () => answer(true));
    socket.once('error', () => answer(false));
    socket.once('close', () => resolve(false));
  });
}
