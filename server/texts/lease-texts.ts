import { randomUUID } from 'node:crypto';
import type { Job } from '../commands/run-command';
import type { Context } from '../context';
import { change, select } from '../db/sql';
import { inTransaction } from '../db/transaction';

/** A text that this worker may hand over while the lease holds. */
export interface Leased {
  readonly id: string;
  readonly token: string;
}

/**
 * Leases texts that are due. Workers step over each other's rows. The lease runs by the database's
 * clock alone, so that workers whose clocks differ agree when it ends. It is no change that a board
 * would show, so it is no command.
 */
export function leaseDue(context: Context, most: number, leaseMs: number): Promise<Leased[]> {
  const token = randomUUID();
  return inTransaction(context.sequelize, async (tx) => {
    // The confirmation of an opt-out is the last text: it waits for those that are on the wire.
    const due = await select<{ id: string }>(
      context.sequelize,
      `SELECT m.id FROM messages m
        WHERE m.state = 'new' AND m.due_at <= ?
          AND (m.claim_until IS NULL OR m.claim_until < UTC_TIMESTAMP(3))
          AND (m.milestone IS NULL OR m.milestone <> 'stop-confirmed' OR NOT EXISTS (
                SELECT 1 FROM messages w WHERE w.phone = m.phone AND w.state = 'sending'))
        ORDER BY m.due_at
        LIMIT ?
          FOR UPDATE SKIP LOCKED`,
      [new Date(context.clock()), most],
      tx,
    );
    if (due.length === 0) return [];
    await change(
      context.sequelize,
      `UPDATE messages
          SET claim_token = ?, claim_until = UTC_TIMESTAMP(3) + INTERVAL ? MICROSECOND
        WHERE id IN (?)`,
      [token, leaseMs * 1000, due.map(({ id }) => id)],
      tx,
    );
    return due.map(({ id }) => ({ id, token }));
  });
}

/** Renews the lease inside a command's transaction, as the text goes onto the wire. */
export async function renewLease(
  { sequelize, tx }: Pick<Job, 'sequelize' | 'tx'>,
  { id, token }: Leased,
  leaseMs: number,
): Promise<void> {
  await change(
    sequelize,
    `UPDATE messages SET claim_until = UTC_TIMESTAMP(3) + INTERVAL ? MICROSECOND
      WHERE id = ? AND claim_token = ?`,
    [leaseMs * 1000, id, token],
    tx,
  );
}

/** Whether the lease still runs, by the database's clock. */
export async function holdsLease(
  { sequelize, tx }: Pick<Job, 'sequelize' | 'tx'>,
  { id, token }: Leased,
): Promise<boolean> {
  const rows = await select(
    sequelize,
    'SELECT 1 FROM messages WHERE id = ? AND claim_token = ? AND claim_until > UTC_TIMESTAMP(3)',
    [id, token],
    tx,
  );
  return rows.length > 0;
}
