import path from 'node:path';

import { defineConfig, devices } from '@playwright/test';

/**
 * The browser stories, in Debian's Chromium against the built product. `npm test` chooses free ports;
 * by hand: `npx playwright test -c test/playwright.config.ts`. With THAWLINE_BROWSER_TRACE set, a story
 * that fails leaves a trace to step through; recording it takes as long as half of the stories.
 *
 * Two workers, each with a product, a database and a storm of its own: stories of one worker run one
 * after the other, and never meet those of the other. The fake text service of each answers one port
 * above its product.
 */
const WORKERS = 2;

const root = path.resolve(__dirname, '..');
const firstPort = Number(process.env['THAWLINE_BROWSER_PORT'] ?? 4390);
const report = process.env['THAWLINE_BROWSER_REPORT'];
/** Which of the workers reads this file; the first program that does is none of them. */
const seat = Number(process.env['TEST_PARALLEL_INDEX'] ?? 0);
const portOf = (worker: number): number => firstPort + 2 * worker;

// Handed on to the products below and to the stories.
process.env['THAWLINE_BROWSER_PORT'] = String(firstPort);
process.env['THAWLINE_BROWSER_DATA'] = path.join(root, '.data', `browser-${seat}`);
process.env['THAWLINE_BROWSER_TEXTS'] = `http://127.0.0.1:${portOf(seat) + 1}`;

export default defineConfig({
  testDir: './browser',
  outputDir: path.join(root, 'test-results'),
  workers: WORKERS,
  fullyParallel: false,
  // None gets a second try.
  retries: 0,
  forbidOnly: true,
  // For a story that hangs; on a busy machine an honest one takes minutes.
  timeout: 600_000,
  expect: { timeout: 60_000 },
  reporter: [['list'], ...(report ? [['json', { outputFile: report }] as const] : [])],
  use: {
    ...devices['Desktop Chrome'],
    baseURL: `http://127.0.0.1:${portOf(seat)}`,
    viewport: { width: 1440, height: 900 },
    locale: 'en-US',
    timezoneId: 'America/New_York',
    trace: process.env['THAWLINE_BROWSER_TRACE'] ? 'retain-on-failure' : 'off',
    screenshot: 'only-on-failure',
    launchOptions: {
      executablePath: process.env['THAWLINE_CHROMIUM'] ?? '/usr/bin/chromium',
      args: [
        '--no-sandbox',
        '--disable-gpu',
        '--disable-quic',
        '--no-first-run',
        '--disable-background-networking',
        '--disable-component-update',
        '--disable-sync',
        '--disable-dev-shm-usage',
      ],
    },
  },
  // One command for all products: those of a list are started one after the other.
  webServer: {
    command: `"${process.execPath}" server/setup/browser-servers.mjs ${WORKERS} ${firstPort}`,
    cwd: root,
    wait: { stdout: /^all serve$/m },
    timeout: 240_000,
    stdout: 'ignore',
    stderr: 'pipe',
    gracefulShutdown: { signal: 'SIGTERM', timeout: 20_000 },
  },
});
