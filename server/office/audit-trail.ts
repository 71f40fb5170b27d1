import type { Sequelize } from 'sequelize';
import type { AuditEntryDto } from '@shared/contract/office';
import { select } from '../db/sql';

const PAGE = 100;

interface StoredEntry {
  n: number;
  at: Date;
  actor: string;
  command: string;
  entity: string;
  entity_id: string;
  summary: string;
}

/**
 * One page of an audit chain, newest first.
 *
 * @param chain a storm's id, or `OFFICE` for what belongs to no storm
 * @param page `before`: only entries older than this number
 */
export async function auditTrail(
  sequelize: Sequelize,
  chain: string,
  {
    entityId = null,
    before = null,
  }: { readonly entityId?: string | null; readonly before?: number | null },
): Promise<AuditEntryDto[]> {
  const rows = await select<StoredEntry>(
    sequelize,
    `SELECT n, at, actor, command, entity, entity_id, summary FROM audit_entries
      WHERE chain = ? AND (? IS NULL OR entity_id = ?) AND (? IS NULL OR n < ?)
      ORDER BY n DESC LIMIT ?`,
    [chain, entityId, entityId, before, before, PAGE],
  );
  return rows.map((row) => ({
    n: Number(row.n),
    at: row.at.getTime(),
    by: row.actor,
    command: row.command,
    entity: row.entity,
    entityId: row.entity_id,
    summary: row.summary,
  }));
}
