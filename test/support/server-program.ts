import type { AddressInfo } from 'node:net';
import { pino } from 'pino';
import type { QueryOptions, Sequelize } from 'sequelize';
import { z } from 'zod';
import { createApp } from '../../server/app';
import { connect } from '../../server/db/connect';
import { testConfig } from './config';
import { TEST_REGION } from './region';

/** A whole server in a process of its own, to be killed. It is told what to do in one variable. */
const Told = z.object({
  database: z.object({
    host: z.string(),
    port: z.number(),
    user: z.string(),
    password: z.string(),
    name: z.string(),
  }),
  now: z.number(),
  /** It kills itself once this many statements of transactions are done; `null`: never. */
  dieAfter: z.int().nonnegative().nullable(),
});

const told = Told.parse(JSON.parse(process.env['SERVER_PROGRAM'] ?? '{}'));

/** As kill -9 does: no handler runs, nothing is written, the connections are just gone. */
const die = (): void => void process.kill(process.pid, 'SIGKILL');

function dieAfter(sequelize: Sequelize, most: number): void {
  const query = sequelize.query.bind(sequelize) as (...args: unknown[]) => Promise<unknown>;
  let done = 0;
  const counting = async (sql: unknown, options?: QueryOptions): Promise<unknown> => {
    if (!options?.transaction) return query(sql, options);
    if (done >= most) die();
    const result = await query(sql, options);
    done += 1;
    if (done >= most) die();
    return result;
  };
  sequelize.query = counting as Sequelize['query'];
}

async function main(): Promise<void> {
  const sequelize = connect(told.database);
  const unused = { run: () => Promise.reject(new Error('this server has no such worker')) };
  const app = await createApp({
    config: testConfig(told.database),
    sequelize,
    log: pino({ level: 'silent' }),
    clock: () => told.now,
    region: TEST_REGION,
    planner: unused,
    pockets: unused,
    forecast: unused,
    roads: null,
    logReader: unused,
    wakeOutbox: () => undefined,
  });
  if (told.dieAfter !== null) dieAfter(sequelize, told.dieAfter);
  app.http.listen(0, '127.0.0.1', () => {
    const { port } = app.http.address() as AddressInfo;
    process.stdout.write(`listening ${String(port)}\n`);
  });
}

void main();
