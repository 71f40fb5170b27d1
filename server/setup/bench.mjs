/**
 * `npm run bench [name …]`: runs the benches of test/bench and prints their figures as one JSON object on
 * stdout; progress goes to stderr. A bench is a TypeScript program that prints one JSON object itself.
 */
import { readdir } from 'node:fs/promises';
import os from 'node:os';
import path from 'node:path';

import { bundle } from './bundle.mjs';
import { ensureChromium } from './chromium.mjs';
import { ensureDataFolder } from './data-folder.mjs';
import { ensureMariadb, SERVERS, stopMariadb } from './mariadb.mjs';
import { ensureNode } from './node-version.mjs';
import { ensurePackages } from './packages.mjs';
import { root } from './paths.mjs';
import { runMain, SetupProblem } from './problem.mjs';
import { ensureBuild } from './product-build.mjs';
import { runForJson } from './run.mjs';
import { stepPrinter } from './steps.mjs';

const FOLDER = 'test/bench';
const OUTPUT = path.join(root, 'dist', 'bench');

const { step } = stepPrinter(process.stderr);
let stopDatabase = async () => {};
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
  process.once(signal, () => void stopDatabase().finally(() => process.exit(130)));
}

await runMain(async () => {
  ensureNode();
  await ensureDataFolder();
  await step('packages', ensurePackages);
  const names = await wantedBenches(process.argv.slice(2));
  await step('build', ensureBuild);
  await bundle(
    names.map((name) => `${FOLDER}/${name}.ts`),
    OUTPUT,
  );
  const env = await step('database', startDatabase);
  env.THAWLINE_CHROMIUM = await step('chromium', async (tell) => {
    const program = await ensureChromium(tell);
    return { text: program, value: program };
  });

  const figures = { machine: machine() };
  try {
    for (const name of names) figures[name] = await step(name, () => measure(name, env));
  } finally {
    await stopDatabase();
  }
  process.stdout.write(`${JSON.stringify(figures, null, 2)}\n`);
});

/** Files that end in -bench.ts; those named on the command line, or all. */
async function wantedBenches(wanted) {
  const files = await readdir(path.join(root, FOLDER)).catch(() => []);
  const all = files
    .filter((file) => file.endsWith('-bench.ts'))
    .map((file) => file.slice(0, -'.ts'.length));
  const names = wanted.length
    ? all.filter((name) => wanted.some((word) => name.includes(word)))
    : all;
  if (names.length > 0) return names.sort();
  throw new SetupProblem(
    `No bench${wanted.length ? ` matches ${wanted.join(', ')}` : ''}; there are: ${all.join(', ') || 'none'}.`,
  );
}

async function measure(name, env) {
  const value = await runForJson(
    process.execPath,
    ['--enable-source-maps', path.join(OUTPUT, `${name}.js`)],
    {
      env,
      onError: (text) => process.stderr.write(text),
    },
  );
  return { text: 'measured', value };
}

/** Benches measure with the product's settings: every commit is on the disk before it is acknowledged. */
async function startDatabase(tell) {
  const { host, port, user, password, started } = await ensureMariadb(SERVERS.bench, tell);
  if (started) stopDatabase = () => stopMariadb(SERVERS.bench);
  return {
    text: `MariaDB on ${host}:${port}`,
    value: {
      THAWLINE_TEST_DB_HOST: host,
      THAWLINE_TEST_DB_PORT: String(port),
      THAWLINE_TEST_DB_USER: user,
      THAWLINE_TEST_DB_PASSWORD: password,
    },
  };
}

function machine() {
  const [cpu] = os.cpus();
  return {
    node: process.versions.node,
    cpu: cpu?.model ?? 'unknown',
    cores: os.cpus().length,
    memoryGiB: Math.round(os.totalmem() / 2 ** 30),
    loadBefore: Number(os.loadavg()[0].toFixed(2)),
    at: new Date().toISOString(),
  };
}
