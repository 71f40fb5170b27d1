import path from 'node:path';
import type { Page } from '@playwright/test';
import { pino } from 'pino';
import { ensureDemoRegion } from '../../server/region/demo-region';
import { openRegion } from '../../server/region/open-region';
import { readAddressBook } from '../../server/region/region-data';
import { createPocketsWorker } from '../../server/workers/pockets-client';
import { createRoadsWorker, RoadsClient } from '../../server/workers/roads-client';
import { startServer } from '../support/server';
import { launchBrowser, sendOut, signedInPage, takeMany, withClient } from './full-board';
import { quantile } from './quantiles';

const CALLS = 3000;
const TECHNICIANS = 60;
const STOPS_EACH = 8;
const PORT = 4396;
const SLOW_FRAME_MS = 50;
/** A drag, across and back, as a hand does it. */
const DRAG_STEPS = 45;
const DRAG_STEP_MS = 16;

interface Frames {
  readonly times: number[];
  readonly longTasks: number[];
  /** What tasks of the page's thread took of the processor, whoever else was using it. */
  readonly taskCpu: number[];
}

/** The map with a full storm on it in Chromium: how long frames take while it is moved and zoomed. */
async function main(): Promise<void> {
  const imported = await ensureDemoRegion(path.resolve('tiles'));
  const region = await openRegion(imported);
  const { addresses } = await readAddressBook(imported.folder);
  const pockets = createPocketsWorker(path.resolve('dist/server/pockets-worker.js'));
  const roadsThread = createRoadsWorker(path.resolve('dist/server/roads-worker.js'));
  const roads = new RoadsClient(roadsThread);
  await roads.switchTo({ folder: imported.folder, name: imported.manifest.name });
  const server = await startServer({
    port: PORT,
    config: withClient(PORT),
    context: { region, pockets, roads, log: pino({ level: 'error' }), clock: () => Date.now() },
  });
  await takeMany(server, addresses, CALLS);
  await sendOut(server, addresses, TECHNICIANS, STOPS_EACH);
  const browser = await launchBrowser();
  const page = await signedInPage(browser, server);
  const map = page.getByRole('application', { name: /Map of/ });
  await map.waitFor();
  await page.waitForTimeout(4000);
  const box = await map.boundingBox();
  if (!box) throw new Error('the map has no size');
  const middle = { x: box.x + box.width / 2, y: box.y + box.height / 2 };

  const figures: Record<string, unknown> = {};
  const panned: Frames[] = [];
  const zoomed: Frames[] = [];
  const note = (name: string, frames: Frames, into: Frames[]): void => {
    figures[name] = summary(frames);
    into.push(frames);
  };
  note('panFarOut', await during(page, () => drag(page, middle)), panned);
  note('zoomIn', await during(page, () => wheel(page, middle, -1, 6)), zoomed);
  await page.waitForTimeout(1500);
  note('panClose', await during(page, () => drag(page, middle)), panned);
  note('zoomOut', await during(page, () => wheel(page, middle, 1, 3)), zoomed);
  await page.waitForTimeout(1500);
  note('panMiddle', await during(page, () => drag(page, middle)), panned);
  await map.focus();
  note('panByKeys', await during(page, () => arrows(page)), panned);

  process.stdout.write(
    JSON.stringify({
      calls: CALLS,
      technicians: TECHNICIANS,
      stops: TECHNICIANS * STOPS_EACH,
      map: { width: Math.round(box.width), height: Math.round(box.height) },
      ...figures,
      pan: summary(joined(panned)),
      zoom: summary(joined(zoomed)),
    }),
  );
  await browser.close();
  await server.close();
  await Promise.all([pockets.close(), roadsThread.close()]);
}

const summary = ({ times, longTasks, taskCpu }: Frames) => ({
  frames: times.length,
  p50: quantile(times, 0.5),
  p95: quantile(times, 0.95),
  longest: quantile(times, 1),
  over50ms: times.filter((ms) => ms > SLOW_FRAME_MS).length,
  /** Work of the page's own thread that held it up for more than 50 ms. */
  longTasks: longTasks.length,
  longestTask: quantile(longTasks, 1),
  /** The same by the processor's own count, which a busy machine does not lengthen as much. */
  longTasksByCpu: taskCpu.filter((ms) => ms > SLOW_FRAME_MS).length,
  longestTaskByCpu: quantile(taskCpu, 1),
});

const joined = (all: readonly Frames[]): Frames => ({
  times: all.flatMap(({ times }) => times),
  longTasks: all.flatMap(({ longTasks }) => longTasks),
  taskCpu: all.flatMap(({ taskCpu }) => taskCpu),
});

/** Times between frames while the hand works, and a moment longer: the picture settles then. */
async function during(page: Page, work: () => Promise<void>): Promise<Frames> {
  const browser = page.context().browser();
  await browser?.startTracing(page, {
    categories: ['disabled-by-default-devtools.timeline', 'toplevel'],
  });
  await page.evaluate(() => {
    const seen = { times: [] as number[], longTasks: [] as number[], isOn: true };
    (globalThis as unknown as { seen: typeof seen }).seen = seen;
    new PerformanceObserver((list) => {
      for (const { duration } of list.getEntries()) seen.longTasks.push(duration);
    }).observe({ entryTypes: ['longtask'] });
    let last = performance.now();
    const tick = (now: number): void => {
      seen.times.push(now - last);
      last = now;
      if (seen.isOn) requestAnimationFrame(tick);
    };
    requestAnimationFrame(tick);
  });
  await work();
  await page.waitForTimeout(600);
  const seen = await page.evaluate(() => {
    const { seen } = globalThis as unknown as {
      seen: Omit<Frames, 'taskCpu'> & { isOn: boolean };
    };
    seen.isOn = false;
    return { times: seen.times.slice(1), longTasks: seen.longTasks };
  });
  const trace = await browser?.stopTracing();
  return { ...seen, taskCpu: trace ? taskCpuOf(trace) : [] };
}

/** Milliseconds of processor time of every task of the thread that most of them ran in: the page's. */
function taskCpuOf(trace: Buffer): number[] {
  const { traceEvents } = JSON.parse(trace.toString('utf8')) as {
    traceEvents: {
      name: string;
      ph: string;
      pid: number;
      tid: number;
      tdur?: number;
      args?: { name?: string };
    }[];
  };
  const pages = new Set(
    traceEvents
      .filter(({ name, args }) => name === 'thread_name' && args?.name === 'CrRendererMain')
      .map(({ pid, tid }) => `${pid} ${tid}`),
  );
  return traceEvents.flatMap(({ name, pid, tid, tdur }) =>
    name.endsWith('RunTask') && tdur !== undefined && pages.has(`${pid} ${tid}`)
      ? [tdur / 1000]
      : [],
  );
}

async function drag(page: Page, { x, y }: { x: number; y: number }): Promise<void> {
  for (const [dx, dy] of [
    [-1, -0.4],
    [1, 0.4],
    [0.3, 1],
    [-0.3, -1],
  ] as const) {
    const reach = 300;
    await page.mouse.move(x - dx * reach, y - dy * reach);
    await page.mouse.down();
    for (let i = 0; i <= DRAG_STEPS; i++) {
      const share = (2 * i) / DRAG_STEPS - 1;
      await page.mouse.move(x + dx * reach * share, y + dy * reach * share);
      await page.waitForTimeout(DRAG_STEP_MS);
    }
    await page.mouse.up();
    await page.waitForTimeout(400);
  }
}

async function wheel(
  page: Page,
  { x, y }: { x: number; y: number },
  way: 1 | -1,
  steps: number,
): Promise<void> {
  await page.mouse.move(x, y);
  for (let i = 0; i < steps; i++) {
    await page.mouse.wheel(0, way * 60);
    await page.waitForTimeout(900);
  }
}

async function arrows(page: Page): Promise<void> {
  for (const key of ['ArrowLeft', 'ArrowUp', 'ArrowRight', 'ArrowDown']) {
    for (let i = 0; i < 5; i++) {
      await page.keyboard.press(key);
      await page.waitForTimeout(180);
    }
  }
}

void main();
