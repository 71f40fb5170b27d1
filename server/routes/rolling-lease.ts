import { randomUUID } from 'node:crypto';
import type { Sequelize } from 'sequelize';
import { Refusal } from '@shared/domain/errors';
import type { Job } from '../commands/run-command';
import { change, insert, select } from '../db/sql';

/** Longer than any search and its command take; whoever stood still for so long has lost it. */
const LEASE_SECONDS = 30;

/**
 * The turn to plan a storm's routes from facts that nobody has planned from yet; `null` when they are
 * planned already or another server is at it. Time is the database's, so that clocks need not agree.
 */
export async function takeTurn(
  sequelize: Sequelize,
  stormId: string,
  factsKey: string,
): Promise<string | null> {
  const holder = randomUUID();
  await insert(sequelize, 'INSERT IGNORE INTO rolling_plans (storm_id) VALUES (?)', [stormId]);
  const taken = await change(
    sequelize,
    `UPDATE rolling_plans SET holder = ?, held_until = NOW(3) + INTERVAL ? SECOND
      WHERE storm_id = ? AND facts_key <> ? AND (holder IS NULL OR held_until < NOW(3))`,
    [holder, LEASE_SECONDS, stormId, factsKey],
  );
  return taken === 1 ? holder : null;
}

export async function plannedKey(sequelize: Sequelize, stormId: string): Promise<string> {
  const [row] = await select<{ facts_key: string }>(
    sequelize,
    'SELECT facts_key FROM rolling_plans WHERE storm_id = ?',
    [stormId],
  );
  return row?.facts_key ?? '';
}

/** Gives the turn back; with a key when these facts are dealt with. Whoever has lost it changes nothing. */
export async function endTurn(
  sequelize: Sequelize,
  stormId: string,
  holder: string,
  factsKey: string | null,
): Promise<void> {
  await change(
    sequelize,
    `UPDATE rolling_plans SET holder = NULL, held_until = NULL, facts_key = COALESCE(?, facts_key)
      WHERE storm_id = ? AND holder = ?`,
    [factsKey, stormId, holder],
  );
}

/**
 * Locks the turn within the command that makes use of it, before anything else of the storm.
 *
 * @throws Refusal `plan-overtaken` when it was lost meanwhile: a server that stood still does nothing late
 */
export async function holdTurn(job: Job, stormId: string, holder: string): Promise<void> {
  const [row] = await select<{ holder: string | null }>(
    job.sequelize,
    'SELECT holder FROM rolling_plans WHERE storm_id = ? FOR UPDATE',
    [stormId],
    job.tx,
  );
  if (row?.holder !== holder)
    throw new Refusal('plan-overtaken', 'Another server has planned these routes meanwhile.');
}

/** Ends the turn with the command. */
export async function endTurnWith(job: Job, stormId: string, factsKey: string): Promise<void> {
  await change(
    job.sequelize,
    'UPDATE rolling_plans SET holder = NULL, held_until = NULL, facts_key = ? WHERE storm_id = ?',
    [factsKey, stormId],
    job.tx,
  );
}
