import { createHash } from 'node:crypto';
import type { Sequelize, Transaction } from 'sequelize';
import { change, insert, select } from '../db/sql';
import type { Order } from './run-command';

export interface AuditNote {
  readonly entity: string;
  readonly entityId: string;
  /** What was done, in words, without personal data. */
  readonly summary: string;
}

/** What one entry says; its hash covers this and the entry before. */
export interface AuditEntry extends AuditNote {
  readonly chain: string;
  readonly n: number;
  readonly at: Date;
  readonly userId: string | null;
  readonly actor: string;
  readonly command: string;
  readonly commandId: string;
}

/** The hash that an empty chain starts from. */
export const FIRST_HASH = '0'.repeat(64);
/** Where commands are written that belong to no storm. */
export const OFFICE = 'office';

/** Each entry's hash covers the one before it, so a row that was changed or taken out shows. */
export function auditHash(before: string, entry: AuditEntry): string {
  return createHash('sha256')
    .update(
      JSON.stringify([
        before,
        entry.chain,
        entry.n,
        entry.at.toISOString(),
        entry.userId,
        entry.actor,
        entry.command,
        entry.commandId,
        entry.entity,
        entry.entityId,
        entry.summary,
      ]),
    )
    .digest('hex');
}

/** Writes a command's audit entries at the end of its chain. */
export async function appendAudit(
  sequelize: Sequelize,
  done: {
    readonly order: Order;
    readonly notes: readonly AuditNote[];
    readonly at: Date;
    readonly stormId: string | null;
  },
  tx: Transaction,
): Promise<void> {
  const chain = done.stormId ?? OFFICE;
  let { n, hash } = await lockChain(sequelize, chain, tx);
  const rows: unknown[][] = [];
  for (const note of done.notes) {
    n += 1;
    const entry: AuditEntry = {
      ...note,
      summary: note.summary.slice(0, 300),
      chain,
      n,
      at: done.at,
      userId: done.order.actor.userId,
      actor: done.order.actor.name,
      command: done.order.type,
      commandId: done.order.commandId,
    };
    hash = auditHash(hash, entry);
    rows.push([
      chain,
      n,
      entry.at,
      entry.userId,
      entry.actor,
      entry.command,
      entry.commandId,
      entry.entity,
      entry.entityId,
      entry.summary,
      hash,
    ]);
  }
  await insert(
    sequelize,
    `INSERT INTO audit_entries
       (chain, n, at, user_id, actor, command, command_id, entity, entity_id, summary, hash)
     VALUES ?`,
    [rows],
    tx,
  );
  await change(
    sequelize,
    'UPDATE audit_chains SET n = ?, hash = ? WHERE chain = ?',
    [n, hash, chain],
    tx,
  );
}

/** The end of a chain, locked until the command ends. The first entry of all makes it. */
async function lockChain(
  sequelize: Sequelize,
  chain: string,
  tx: Transaction,
): Promise<{ n: number; hash: string }> {
  const ends = (): Promise<{ n: number; hash: string }[]> =>
    select(sequelize, 'SELECT n, hash FROM audit_chains WHERE chain = ? FOR UPDATE', [chain], tx);
  const [end] = await ends();
  if (end) return end;
  await insert(
    sequelize,
    'INSERT IGNORE INTO audit_chains (chain, n, hash) VALUES (?, 0, ?)',
    [chain, FIRST_HASH],
    tx,
  );
  const [made] = await ends();
  if (!made) throw new Error(`audit chain ${chain} is missing`);
  return made;
}
