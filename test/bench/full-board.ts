import path from 'node:path';
import { randomUUID } from 'node:crypto';
import type { AddressInfo } from 'node:net';
import { chromium, type Browser, type Page } from '@playwright/test';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { CallRecord } from '../../server/calls/call-record';
import { takeCalls } from '../../server/calls/take-call';
import { machine } from '../../server/commands/actor';
import { runCommand } from '../../server/commands/run-command';
import { Chance, demoCall } from '../../server/demo/demo-calls';
import { FAMILY_NAMES, GIVEN_NAMES } from '../../server/demo/demo-people';
import type { AddressPoint } from '../../server/region/address-points';
import { StopRecord } from '../../server/routes/stop-record';
import { UserRecord } from '../../server/staff/user-record';
import { ShiftRecord, TechnicianRecord } from '../../server/technicians/technician-record';
import { PASSWORD, type TestServer } from '../support/server';

/** The server's settings for a bench that looks at the built client in a browser. */
export const withClient = (port: number) => ({
  http: {
    host: '127.0.0.1',
    port,
    publicUrl: `http://localhost:${String(port)}`,
    trustProxyHops: 0,
  },
  environment: 'production' as const,
  clientFolder: path.resolve('dist/client'),
  tilesFolder: path.resolve('tiles'),
});

/** Takes so many calls from addresses of the demo county, received over the last ten hours. */
export async function takeMany(
  server: TestServer,
  addresses: readonly AddressPoint[],
  count: number,
): Promise<void> {
  const chance = new Chance('bench');
  const now = Date.now();
  const piece = 100;
  for (let i = 0; i < count; i += piece)
    await runCommand(
      server.context,
      { actor: machine('Bench'), type: 'takeCall', commandId: randomUUID(), asked: i },
      async (job) => {
        const told = Array.from({ length: Math.min(piece, count - i) }, (_, k) =>
          demoCall(chance, chance.pick(addresses), i + k, {
            receivedAt: now - chance.below(600) * 60_000,
            outAt: now - 3 * HOUR_MS,
            backAt: now - HOUR_MS,
          }),
        );
        await takeCalls(job, server.stormId, told);
        return null;
      },
    );
}

export const launchBrowser = (): Promise<Browser> =>
  chromium.launch({
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
  });

export const addressOf = (server: TestServer): string =>
  `http://127.0.0.1:${String((server.app.http.address() as AddressInfo).port)}`;

/** A page of a large screen, signed in as a dispatcher and on the board. */
export async function signedInPage(browser: Browser, server: TestServer): Promise<Page> {
  const user = await server.signIn('dispatcher');
  const name = (await UserRecord.findByPk(user.userId))?.signInName ?? '';
  const page = await browser.newPage({ viewport: { width: 1920, height: 1080 } });
  await page.goto(`${addressOf(server)}/sign-in`);
  await page.getByLabel('E-mail address').fill(name);
  await page.getByLabel('Password', { exact: true }).fill(PASSWORD);
  await page.keyboard.press('Enter');
  await page.waitForURL(/board/);
  return page;
}

/**
 * So many technicians on shift, each where the van was two minutes ago, with a route of the nearest
 * calls: the first stop accepted, the others planned. Written as rows, since no command is measured.
 */
export async function sendOut(
  server: TestServer,
  addresses: readonly AddressPoint[],
  technicians: number,
  stopsEach: number,
): Promise<void> {
  const chance = new Chance('vans');
  const now = Date.now();
  const free = await CallRecord.findAll({ where: { stormId: server.stormId } });
  for (let i = 0; i < technicians; i++) {
    const [lon, lat] = chance.pick(addresses).at;
    const id = chance.uuid();
    await TechnicianRecord.create({
      id,
      name: `${chance.pick(GIVEN_NAMES)} ${chance.pick(FAMILY_NAMES)}`,
      phone: `+1252555${String(100 + i).padStart(4, '0')}`,
      skills: ['electrical', 'sealed-system', 'commercial'],
      van: {},
      startLon: lon,
      startLat: lat,
      positionLon: lon,
      positionLat: lat,
      positionAt: new Date(now - 2 * MINUTE_MS),
    });
    await ShiftRecord.create({
      id: chance.uuid(),
      technicianId: id,
      startsAt: new Date(now - HOUR_MS),
      endsAt: new Date(now + 10 * HOUR_MS),
    });
    const away = ({ lon: x, lat: y }: CallRecord): number =>
      x === null || y === null ? Infinity : Math.hypot((x - lon) * 0.8, y - lat);
    free.sort((a, b) => away(a) - away(b));
    const calls = free.splice(0, stopsEach);
    for (const [position, call] of calls.entries()) {
      const arriveAt = now + (position * 45 + 20) * MINUTE_MS;
      await StopRecord.create({
        id: chance.uuid(),
        stormId: server.stormId,
        technicianId: id,
        callId: call.id,
        position,
        state: position === 0 ? 'accepted' : 'planned',
        arriveAt: new Date(arriveAt),
        finishAt: new Date(arriveAt + 35 * MINUTE_MS),
        driveMinutes: 10,
        because: 'the nearest call',
      });
      await call.update({ state: position === 0 ? 'accepted' : 'planned' });
    }
  }
}
