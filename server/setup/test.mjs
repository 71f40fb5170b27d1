/**
 * `npm test`: sets up what tests need on a bare machine, runs everything, goes on after a failure, and
 * closes with one summary whose last line counts all tests and checks.
 *
 *   npm test -- --only=domain,server     only these parts: checks, domain, client, build, server, browser
 *   npm test -- --only=server take-call  only spec files whose path matches
 */
import { runBrowserStories } from './browser-part.mjs';
import { CHECKS, runCheck } from './checks.mjs';
import { ensureChromium } from './chromium.mjs';
import { ensureDataFolder } from './data-folder.mjs';
import { runJest } from './jest-part.mjs';
import { tryLock } from './lock.mjs';
import { ensureMariadb, SERVERS, stopMariadb } from './mariadb.mjs';
import { ensureNode } from './node-version.mjs';
import { ensurePackages } from './packages.mjs';
import { runMain, SetupProblem } from './problem.mjs';
import { ensureBuild } from './product-build.mjs';
import { stepPrinter } from './steps.mjs';
import { describeFailures, summary, wantedParts } from './test-report.mjs';

const { say, step } = stepPrinter();
const results = [];
let stopDatabase = async () => {};

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
  process.once(signal, () => void stopDatabase().finally(() => process.exit(130)));
}

await runMain(async () => {
  const { parts, pattern } = wantedParts(process.argv.slice(2));
  ensureNode();
  await ensureDataFolder();
  if (!(await tryLock('test'))) {
    throw new SetupProblem(
      'A test run of this folder is going on already; wait for its end or stop it.',
    );
  }

  say();
  try {
    // One waits for the npm registry, the other for Debian's packages.
    const [, env] = await Promise.all([step('packages', ensurePackages), prepareMachine(parts)]);
    say();
    await runParts(parts, { env, pattern });
  } finally {
    await stopDatabase();
  }
  process.stdout.write(`${describeFailures(results)}\n${summary(results)}\n`);
  return results.some(({ failed }) => failed > 0) ? 1 : 0;
});

/** The database server and the browser, if a wanted part needs them. Returns the environment for the tests. */
async function prepareMachine(parts) {
  const env = {};
  if (parts.has('server') || parts.has('browser')) {
    Object.assign(env, await step('database', startDatabase));
  }
  if (parts.has('browser')) env.THAWLINE_CHROMIUM = await step('chromium', findChromium);
  return env;
}

/**
 * Two cores, kept busy to the end. What only thinks (checks, then the build) runs beside the rules and
 * the components, and goes on beside the server's tests, which wait now and then. The browser stories
 * are heaviest, so they come last and alone.
 */
async function runParts(parts, options) {
  const part = (name, work) => (parts.has(name) ? measure(name, work) : undefined);
  const checksAndBuild = async () => {
    for (const check of parts.has('checks') ? CHECKS : []) {
      await measure(check.name, async () => {
        const { passed, output } = await runCheck(check);
        return {
          passed: passed ? 1 : 0,
          failed: passed ? 0 : 1,
          skipped: 0,
          details: passed ? [] : [output],
        };
      });
    }
    await part('build', build);
  };
  const jestParts = async () => {
    await part('domain', () => runJest('domain', { workers: 1, ...options }));
    await part('client', () => runJest('client', { workers: 1, ...options }));
    await part('server', () => runJest('server', { workers: 2, ...options }));
  };
  await Promise.all([checksAndBuild(), jestParts()]);
  // The stories run against the built product; a stale build must not pass for a new one.
  if (parts.has('browser') && !parts.has('build')) await measure('build', build);
  await part('browser', () => runBrowserStories(options));
}

async function measure(name, work) {
  const start = performance.now();
  const counts = await work();
  const result = { name, ...counts, seconds: (performance.now() - start) / 1000 };
  results.push(result);
  const { passed, failed, skipped, seconds } = result;
  say(
    `${name.padEnd(20)} ${passed} passed, ${failed} failed${skipped ? `, ${skipped} skipped` : ''}  ${seconds.toFixed(1)} s`,
  );
}

async function build() {
  try {
    await ensureBuild();
    return { passed: 1, failed: 0, skipped: 0, details: [] };
  } catch (error) {
    if (!(error instanceof SetupProblem)) throw error;
    return { passed: 0, failed: 1, skipped: 0, details: [error.message] };
  }
}

async function startDatabase(tell) {
  const { host, port, user, password, started } = await ensureMariadb(SERVERS.tests, tell);
  // One that ran before may serve somebody else's tests.
  if (started) stopDatabase = () => stopMariadb(SERVERS.tests);
  return {
    text: `MariaDB ${started ? 'started' : 'runs already'} on ${host}:${port}`,
    value: {
      THAWLINE_TEST_DB_HOST: host,
      THAWLINE_TEST_DB_PORT: String(port),
      THAWLINE_TEST_DB_USER: user,
      THAWLINE_TEST_DB_PASSWORD: password,
    },
  };
}

async function findChromium(tell) {
  const program = await ensureChromium(tell);
  return { text: program, value: program };
}
