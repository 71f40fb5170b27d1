import { randomUUID } from 'node:crypto';
import type { AddressInfo } from 'node:net';
import { pino } from 'pino';
import type { Sequelize } from 'sequelize';
import { io, type Socket } from 'socket.io-client';
import request, { type Test } from 'supertest';
import type { Role } from '@shared/contract/common';
import { PATHS, type RouteName } from '@shared/contract/paths';
import type { ClientEvents, ServerEvents } from '@shared/contract/realtime';
import type { Instant } from '@shared/domain/instant';
import { createApp, type App, type GivenContext } from '../../server/app';
import { RateLimit } from '../../server/http/rate-limit';
import type { Config } from '../../server/config';
import type { Context } from '../../server/context';
import { StormRecord } from '../../server/storms/storm-record';
import { Accounts, PASSWORD } from './accounts';
import { ORIGIN, testConfig } from './config';
import { emptyAll, freshDatabase, testDatabase } from './database';
import { TEST_REGION } from './region';

export { PASSWORD };
/** 2026-10-03 06:00 UTC, some night of a storm. */
export const NIGHT: Instant = Date.UTC(2026, 9, 3, 6);

export interface TestServer {
  readonly app: App;
  readonly context: Context;
  readonly sequelize: Sequelize;
  readonly url: string;
  /** Moves the server's clock. */
  setNow(now: Instant): void;
  now(): Instant;
  /** Starts again with empty tables, an open storm and nobody known. */
  reset(): Promise<void>;
  readonly stormId: string;
  /** Makes an account and signs it in; see Accounts for what that saves. */
  signIn(role: Role, name?: string): Promise<TestPerson>;
  close(): Promise<void>;
}

/** Somebody at a browser: cookies, the echoed token, and a socket when asked for. */
export interface TestPerson {
  readonly userId: string;
  readonly technicianId: string | null;
  readonly cookies: string;
  /** Calls a route by its name. Refusals come back as they are. */
  call(
    name: RouteName,
    args?: {
      readonly params?: Record<string, string>;
      readonly query?: Record<string, string>;
      readonly body?: object;
      readonly bytes?: Buffer;
    },
  ): Test;
  socket(): Promise<Socket<ServerEvents, ClientEvents>>;
}

/** The whole server on a real database and a free port, with a clock that stands until it is set. */
export async function startServer(
  options: {
    port?: number;
    config?: Partial<Config>;
    context?: Partial<GivenContext>;
  } = {},
): Promise<TestServer> {
  const sequelize = await freshDatabase();
  let now = NIGHT;
  let stormId = '';
  const config: Config = { ...testConfig(testDatabase()), ...options.config };
  // Time of the limits stands still but for a reset: no spec is refused for being quick.
  let minutes = 0;
  const unused = { run: () => Promise.reject(new Error('this test has no such worker')) };
  const app = await createApp({
    config,
    sequelize,
    log: pino({ level: process.env['THAWLINE_TEST_LOG'] ?? 'silent' }),
    clock: () => now,
    region: TEST_REGION,
    planner: unused,
    pockets: unused,
    forecast: unused,
    roads: null,
    logReader: unused,
    wakeOutbox: () => undefined,
    rateLimit: new RateLimit(() => minutes * 60_000),
    ...options.context,
  });
  await new Promise<void>((resolve) => app.http.listen(options.port ?? 0, '127.0.0.1', resolve));
  const url = `http://127.0.0.1:${String((app.http.address() as AddressInfo).port)}`;
  const origin = config.http.publicUrl;
  const accounts = new Accounts(sequelize, url, origin);

  const reset = async (): Promise<void> => {
    await emptyAll(sequelize);
    accounts.forgetPresent();
    now = NIGHT;
    minutes++;
    stormId = randomUUID();
    await StormRecord.create({ id: stormId, name: 'Test storm', openedAt: new Date(now) });
  };
  await reset();

  return {
    app,
    context: app.context,
    sequelize,
    url,
    setNow: (moment) => (now = moment),
    now: () => now,
    reset,
    get stormId() {
      return stormId;
    },
    signIn: async (role, name = role) => {
      const { userId, technicianId, cookies } = await accounts.signIn(role, name);
      return { userId, technicianId, cookies, ...browser(url, cookies, origin) };
    },
    close: async () => {
      await app.close();
      await sequelize.close();
    },
  };
}

/** What somebody with these cookies can do at the server of that address. */
export function browser(
  url: string,
  cookies: string,
  origin = ORIGIN,
): Pick<TestPerson, 'call' | 'socket'> {
  const token = /XSRF-TOKEN=([^;]+)/.exec(cookies)?.[1] ?? '';
  return {
    call: (route, { params = {}, query = {}, body, bytes } = {}) => {
      const [method, pattern] = PATHS[route];
      const path = pattern.replace(/:(\w+)/g, (_, key: string) => params[key] ?? '');
      const verb = method.toLowerCase() as 'get' | 'post' | 'patch' | 'delete';
      const asked = request(url)
        [verb](path)
        .query(query)
        .set('Cookie', cookies)
        .set('Origin', origin)
        .set('X-XSRF-TOKEN', token);
      if (bytes) return asked.type('application/octet-stream').send(bytes);
      return body === undefined ? asked : asked.send(body);
    },
    socket: () =>
      new Promise((resolve, reject) => {
        const socket: Socket<ServerEvents, ClientEvents> = io(url, {
          transports: ['websocket'],
          extraHeaders: { Cookie: cookies, Origin: origin },
          reconnection: false,
          forceNew: true,
        });
        socket.once('connect', () => resolve(socket));
        socket.once('connect_error', reject);
      }),
  };
}
