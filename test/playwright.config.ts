import path from 'node:path';

import { defineConfig, devices } from '@playwright/test';

/**
 * The browser stories, in Debian's Chromium against the built product. `npm test` chooses a free port;
 * by hand: `npx playwright test -c test/playwright.config.ts`.
 *
 * The fake text service answers one port above the product. Sign-ins are in THAWLINE_BROWSER_DATA.
 */
const root = path.resolve(__dirname, '..');
const port = Number(process.env['THAWLINE_BROWSER_PORT'] ?? 4390);
const report = process.env['THAWLINE_BROWSER_REPORT'];

// Handed on to the web server below and to the workers.
process.env['THAWLINE_BROWSER_PORT'] = String(port);
process.env['THAWLINE_BROWSER_DATA'] ??= path.join(root, '.data', 'browser');
process.env['THAWLINE_BROWSER_TEXTS'] ??= `http://127.0.0.1:${port + 1}`;

export default defineConfig({
  testDir: './browser',
  outputDir: path.join(root, 'test-results'),
  // One storm, one database: the stories run one after the other, and none gets a second try.
  workers: 1,
  fullyParallel: false,
  retries: 0,
  forbidOnly: true,
  timeout: 120_000,
  expect: { timeout: 10_000 },
  reporter: [['list'], ...(report ? [['json', { outputFile: report }] as const] : [])],
  use: {
    ...devices['Desktop Chrome'],
    baseURL: `http://127.0.0.1:${port}`,
    viewport: { width: 1440, height: 900 },
    locale: 'en-US',
    timezoneId: 'America/New_York',
    trace: 'retain-on-failure',
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
  webServer: {
    command: `"${process.execPath}" server/setup/browser-server.mjs`,
    cwd: root,
    url: `http://127.0.0.1:${port}/readyz`,
    reuseExistingServer: false,
    timeout: 240_000,
    stdout: 'ignore',
    stderr: 'pipe',
    gracefulShutdown: { signal: 'SIGTERM', timeout: 20_000 },
  },
});
