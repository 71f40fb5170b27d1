import { mkdir, readFile, rm } from 'node:fs/promises';
import path from 'node:path';

import { dataFolder, root } from './paths.mjs';
import { nextFreePort } from './ports.mjs';
import { lastLines, run } from './run.mjs';

const PLAYWRIGHT = path.join(root, 'node_modules', '@playwright', 'test', 'cli.js');
const FIRST_PORT = 4390;

/** Runs the browser stories and counts. A story that passes only at a second try would be a failure. */
export async function runBrowserStories({ env, pattern }) {
  const reports = path.join(dataFolder, 'test-reports');
  await mkdir(reports, { recursive: true });
  const reportFile = path.join(reports, 'browser.json');
  await rm(reportFile, { force: true });
  // For each of two workers a product, and the stand-in of the text service one port above it.
  const port = await nextFreePort(FIRST_PORT, '127.0.0.1', 4);

  const { code, output } = await run(
    process.execPath,
    [
      PLAYWRIGHT,
      ...['test', '-c', 'test/playwright.config.ts'],
      ...(pattern ? ['--pass-with-no-tests', pattern] : []),
    ],
    {
      env: {
        ...env,
        NO_COLOR: '1',
        THAWLINE_BROWSER_PORT: String(port),
        THAWLINE_BROWSER_REPORT: reportFile,
      },
    },
  );
  // No report: the runner itself fell over.
  const report = await readFile(reportFile, 'utf8').then(JSON.parse, () => null);
  if (!report) return { passed: 0, failed: 1, skipped: 0, details: [lastLines(output, 40)] };

  const { expected, unexpected, flaky, skipped } = report.stats;
  const details = [
    ...report.errors.map(({ message }) => message),
    ...report.suites.flatMap((suite) => failuresOf(suite)),
  ];
  let failed = unexpected + flaky + report.errors.length;
  if (failed === 0 && code !== 0) {
    failed = 1;
    details.push(lastLines(output, 40));
  }
  return { passed: expected, failed, skipped, details };
}

function failuresOf(suite) {
  const own = (suite.specs ?? [])
    .filter(({ ok }) => !ok)
    .map(({ title, file, tests }) => {
      const errors = tests.flatMap(({ results }) => results.flatMap((result) => result.errors));
      return `${file}: ${title}\n${errors.map(({ message }) => message).join('\n')}`;
    });
  return [...own, ...(suite.suites ?? []).flatMap((inner) => failuresOf(inner))];
}
