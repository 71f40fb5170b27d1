import type { Sequelize } from 'sequelize';
import type { FeedAnswer, Numbered } from '@shared/contract/realtime';
import { select } from '../db/sql';

/** Past this many missed changes the whole picture is the shorter answer. */
const MOST_CHANGES = 1000;

/** The changes of one stream after a number, in order. */
export async function changesAfter<C>(
  sequelize: Sequelize,
  stormId: string,
  stream: string,
  after: number,
): Promise<Numbered<C>[]> {
  const rows = await select<{ n: number; change: string }>(
    sequelize,
    `SELECT n, \`change\` FROM feed_changes
      WHERE storm_id = ? AND stream = ? AND n > ? ORDER BY n LIMIT ?`,
    [stormId, stream, after, MOST_CHANGES + 1],
  );
  return rows.map((row) => ({
    stormId,
    n: Number(row.n),
    change: JSON.parse(row.change) as C,
  }));
}

/** What a client missed since change `after`, or that it had better start over. */
export async function missedSince<C>(
  sequelize: Sequelize,
  stormId: string,
  stream: string,
  after: number,
): Promise<FeedAnswer<C>> {
  const end = await endOf(sequelize, stormId, stream);
  // A number past the end comes from a database that has since been restored.
  if (after > end || end - after > MOST_CHANGES) return { kind: 'start-over' };
  return { kind: 'changes', changes: await changesAfter<C>(sequelize, stormId, stream, after) };
}

/** The number of a stream's newest change; 0 when it has none. */
export async function endOf(
  sequelize: Sequelize,
  stormId: string,
  stream: string,
): Promise<number> {
  const [feed] = await select<{ n: number }>(
    sequelize,
    'SELECT n FROM feeds WHERE storm_id = ? AND stream = ?',
    [stormId, stream],
  );
  return Number(feed?.n ?? 0);
}
