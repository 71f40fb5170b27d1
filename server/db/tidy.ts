import type { Sequelize } from 'sequelize';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import { change, select } from './sql';

/** Whoever missed more than half of these starts over anyway. */
const KEPT_CHANGES = 2_000;
/** A phone without signal repeats a command hours later; not after a week. */
const REPLIES_KEPT_MS = 7 * 24 * HOUR_MS;
const ATTEMPTS_KEPT_MS = 24 * HOUR_MS;
/** Rows at a time, so that nobody waits long for a lock. */
const BATCH = 500;

/**
 * Lets go of what only grows: changes that every board has long seen, replies that nobody will ask for
 * again (they hold names and addresses), old failures to sign in. That a command was applied is kept for
 * good, so a repeat still changes nothing.
 *
 * @returns how many rows were let go
 */
export async function tidy(sequelize: Sequelize, now: Instant): Promise<number> {
  let gone = 0;
  const feeds = await select<{ storm_id: string; stream: string; n: number }>(
    sequelize,
    'SELECT storm_id, stream, n FROM feeds WHERE n > ?',
    [KEPT_CHANGES],
  );
  for (const { storm_id, stream, n } of feeds)
    gone += await inBatches(
      sequelize,
      'DELETE FROM feed_changes WHERE storm_id = ? AND stream = ? AND n <= ? LIMIT ?',
      [storm_id, stream, Number(n) - KEPT_CHANGES],
    );
  gone += await inBatches(
    sequelize,
    'UPDATE applied_commands SET reply = NULL WHERE at < ? AND reply IS NOT NULL LIMIT ?',
    [new Date(now - REPLIES_KEPT_MS)],
  );
  gone += await inBatches(sequelize, 'DELETE FROM sign_in_attempts WHERE last_at < ? LIMIT ?', [
    new Date(now - ATTEMPTS_KEPT_MS),
  ]);
  return gone;
}

async function inBatches(
  sequelize: Sequelize,
  sql: string,
  values: readonly unknown[],
): Promise<number> {
  let all = 0;
  for (;;) {
    const some = await change(sequelize, sql, [...values, BATCH]);
    all += some;
    if (some < BATCH) return all;
  }
}
