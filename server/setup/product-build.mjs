import { createHash } from 'node:crypto';
import { readdir, readFile, rm, writeFile } from 'node:fs/promises';
import path from 'node:path';

import { bundle } from './bundle.mjs';
import { serverEntries } from './entries.mjs';
import { withLock } from './lock.mjs';
import { root } from './paths.mjs';
import { SetupProblem } from './problem.mjs';
import { lastLines, run } from './run.mjs';

/** What each half of the product is made from. A change in any of these files builds that half anew. */
const INPUTS = {
  server: ['server', 'shared', 'tsconfig.json', 'package-lock.json'],
  client: ['src', 'shared', 'tsconfig.json', 'angular.json', 'package-lock.json'],
};

/** Builds the server and the client into dist/, each only when its sources changed since. */
export function ensureBuild(tell = () => {}) {
  return withLock('build', async () => {
    const built = [];
    if (await buildWhenChanged('server', buildServer)) built.push('server');
    if (
      await buildWhenChanged('client', () => {
        tell('building the client');
        return buildClient();
      })
    ) {
      built.push('client');
    }
    return built.length ? `built ${built.join(' and ')}` : 'up to date';
  });
}

/** Builds the server alone: what the command line needs. */
export function ensureServerBuild() {
  return withLock('build', async () =>
    (await buildWhenChanged('server', buildServer)) ? 'built server' : 'up to date',
  );
}

async function buildWhenChanged(half, build) {
  const stampFile = path.join(root, 'dist', `.${half}-sources`);
  const wanted = await hashOf(INPUTS[half]);
  if ((await readFile(stampFile, 'utf8').catch(() => '')) === wanted) return false;

  // A build that is killed half way must not pass for a finished one.
  await rm(stampFile, { force: true });
  await build();
  await writeFile(stampFile, wanted);
  return true;
}

async function buildServer() {
  const entries = serverEntries();
  if (entries.length === 0)
    throw new SetupProblem('There is no server to build: server/main.ts is missing.');
  const outdir = path.join(root, 'dist', 'server');
  await rm(outdir, { recursive: true, force: true });
  await bundle(entries, outdir);
}

async function buildClient() {
  const ng = path.join(root, 'node_modules', '@angular', 'cli', 'bin', 'ng.js');
  const { code, output } = await run(process.execPath, [ng, 'build', '--progress=false'], {
    env: { NG_CLI_ANALYTICS: 'false', NO_COLOR: '1' },
  });
  if (code !== 0) throw new SetupProblem(`The client does not build:\n${lastLines(output, 40)}`);
}

async function hashOf(inputs) {
  const hash = createHash('sha256');
  for (const input of inputs) {
    for (const file of (await filesUnder(path.join(root, input))).sort()) {
      // The setup scripts are plain JavaScript and no part of what is built.
      if (file.includes(`${path.sep}server${path.sep}setup${path.sep}`)) continue;
      hash
        .update(path.relative(root, file))
        .update('\0')
        .update(await readFile(file))
        .update('\0');
    }
  }
  return hash.digest('hex');
}

async function filesUnder(place) {
  const entries = await readdir(place, { withFileTypes: true, recursive: true }).catch((error) => {
    if (error.code === 'ENOTDIR') return null;
    throw error;
  });
  if (!entries) return [place];
  return entries
    .filter((entry) => entry.isFile() && !entry.name.endsWith('.spec.ts'))
    .map((entry) => path.join(entry.parentPath ?? entry.path, entry.name));
}
