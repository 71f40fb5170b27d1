import { setTimeout as pause } from 'node:timers/promises';
import type { Response, Test } from 'supertest';
import { select } from '../../server/db/sql';
import type { TestServer } from './server';

/**
 * `innodb_trx` is filled anew only when nobody has read it for a tenth of a second. Two specs that look in one
 * rhythm would keep each other from ever learning anything, so nobody keeps a rhythm.
 */
const lookMs = (): number => 120 + Math.random() * 380;

/**
 * Lets requests meet for certain: holds the row that they all need, sends them one by one as soon as
 * the one before waits for a lock, and lets go when all do. Locks are given in the order of asking.
 */
export async function atOnce(
  server: TestServer,
  row: { readonly table: 'storms' | 'technicians' | 'calls'; readonly id: string },
  presses: readonly (() => Test)[],
): Promise<Response[]> {
  const tx = await server.sequelize.transaction();
  try {
    await select(
      server.sequelize,
      `SELECT id FROM ${row.table} WHERE id = ? FOR UPDATE`,
      [row.id],
      tx,
    );
    const replies: Promise<Response>[] = [];
    for (const press of presses) {
      // A request is sent when somebody waits for it.
      replies.push(press().then((reply) => reply));
      const end = Date.now() + 4000;
      while ((await waiting(server)) < replies.length) {
        if (Date.now() > end) throw new Error('the requests never met');
        await pause(lookMs());
      }
    }
    await tx.commit();
    return await Promise.all(replies);
  } catch (error) {
    await tx.rollback().catch(() => undefined);
    throw error;
  }
}

/** How many transactions of this test's own database wait for a lock. */
async function waiting(server: TestServer): Promise<number> {
  const [row] = await select<{ n: number }>(
    server.sequelize,
    `SELECT COUNT(*) AS n FROM information_schema.innodb_trx t
       JOIN information_schema.processlist p ON p.id = t.trx_mysql_thread_id
      WHERE t.trx_state = 'LOCK WAIT' AND p.db = DATABASE()`,
  );
  return Number(row?.n);
}
