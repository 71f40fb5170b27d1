import path from 'node:path';
import { pino } from 'pino';
import type { Page } from '@playwright/test';
import { randomUUID } from 'node:crypto';
import { machine } from '../../server/commands/actor';
import { runCommand } from '../../server/commands/run-command';
import { change, select } from '../../server/db/sql';
import { ensureDemoRegion } from '../../server/region/demo-region';
import { openRegion } from '../../server/region/open-region';
import { readAddressBook } from '../../server/region/region-data';
import { createPocketsWorker } from '../../server/workers/pockets-client';
import { startServer, type TestServer } from '../support/server';
import { addressOf, launchBrowser, signedInPage, takeMany, withClient } from './full-board';
import { quantile, spread } from './quantiles';

const CALLS = 3000;
const LOADS = 5;
const UPDATES_PER_SECOND = 10;
const SCROLL_SECONDS = 10;

/** The board with 3,000 open calls in Chromium: time to the first rows, and frames while it works. */
async function main(): Promise<void> {
  const imported = await ensureDemoRegion(path.resolve('tiles'));
  const region = await openRegion(imported);
  const { addresses } = await readAddressBook(imported.folder);
  const pockets = createPocketsWorker(path.resolve('dist/server/pockets-worker.js'));
  const port = 4395;
  const server = await startServer({
    port,
    config: withClient(port),
    context: { region, pockets, log: pino({ level: 'error' }), clock: () => Date.now() },
  });
  await takeMany(server, addresses, CALLS);
  const browser = await launchBrowser();
  const page = await signedInPage(browser, server);

  const paints: number[] = [];
  for (let i = 0; i < LOADS; i++) {
    await page.goto('about:blank');
    const began = performance.now();
    await page.goto(`${addressOf(server)}/board`);
    await page.locator('thaw-queue-row').nth(8).waitFor();
    paints.push(performance.now() - began);
  }
  const frames = await frameTimes(page, server);
  process.stdout.write(
    JSON.stringify({
      calls: CALLS,
      firstUsefulPaintMs: spread(paints),
      frames: {
        seconds: SCROLL_SECONDS,
        updatesPerSecond: UPDATES_PER_SECOND,
        counted: frames.length,
        p50: quantile(frames, 0.5),
        p99: quantile(frames, 0.99),
        over50ms: frames.filter((ms) => ms > 50).length,
      },
    }),
  );
  await browser.close();
  await server.close();
  await pockets.close();
}

/** Times between frames while the queue scrolls and rows change. */
async function frameTimes(page: Page, server: TestServer): Promise<number[]> {
  const rows = await select<{ id: string }>(
    server.sequelize,
    'SELECT id FROM calls ORDER BY number LIMIT 200',
  );
  let k = 0;
  const update = setInterval(() => {
    const call = rows[k++ % rows.length];
    if (call)
      void runCommand(
        server.context,
        { actor: machine('Bench'), type: 'claimCall', commandId: randomUUID(), asked: k },
        async (job) => {
          job.inStorm(server.stormId);
          await change(
            server.sequelize,
            'UPDATE calls SET version = version + 1 WHERE id = ?',
            [call.id],
            job.tx,
          );
          job.touched.call(call.id);
          job.note('call', call.id, 'changed');
          return null;
        },
      );
  }, 1000 / UPDATES_PER_SECOND);
  const queue = page.locator('cdk-virtual-scroll-viewport').first();
  await queue.hover();
  const frames = page.evaluate(
    (seconds) =>
      new Promise<number[]>((resolve) => {
        const times: number[] = [];
        let last = performance.now();
        const end = last + seconds * 1000;
        const tick = (now: number) => {
          times.push(now - last);
          last = now;
          if (now < end) requestAnimationFrame(tick);
          else resolve(times.slice(1));
        };
        requestAnimationFrame(tick);
      }),
    SCROLL_SECONDS,
  );
  const until = performance.now() + SCROLL_SECONDS * 1000;
  while (performance.now() < until) {
    await page.mouse.wheel(0, 400);
    await page.waitForTimeout(50);
  }
  const result = await frames;
  clearInterval(update);
  return result;
}

void main();
