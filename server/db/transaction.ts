import { setTimeout as pause } from 'node:timers/promises';
import { Transaction, type Sequelize } from 'sequelize';

const MAX_ATTEMPTS = 5;
/** Whoever waits at a screen is told to try again after this long, in milliseconds. */
const GIVE_UP_AFTER_MS = 8000;

/** Deadlock, lock wait timeout, and "row changed since read" under snapshot isolation. */
const WORTH_ANOTHER_TRY = new Set([1213, 1205, 1020]);

/**
 * Runs one unit of work in a transaction, and the whole of it again when the database gave it up
 * for another's sake. Retrying single statements inside a dead transaction would lose the earlier
 * ones.
 *
 * READ COMMITTED, as connect.ts sets it for every connection.
 */
export async function inTransaction<T>(
  sequelize: Sequelize,
  work: (tx: Transaction) => Promise<T>,
): Promise<T> {
  const began = performance.now();
  for (let attempt = 1; ; attempt++) {
    try {
      return await sequelize.transaction(work);
    } catch (error) {
      const isLast = attempt === MAX_ATTEMPTS || performance.now() - began > GIVE_UP_AFTER_MS;
      if (!isWorthAnotherTry(error) || isLast) throw error;
      await pause(Math.random() * 20 * attempt);
    }
  }
}

/** Reads several tables as of one moment. */
export function asOfOneMoment<T>(
  sequelize: Sequelize,
  read: (tx: Transaction) => Promise<T>,
): Promise<T> {
  return sequelize.transaction(
    { isolationLevel: Transaction.ISOLATION_LEVELS.REPEATABLE_READ },
    read,
  );
}

/** Whether the database gave a transaction up for another's sake: the same again may work. */
export function isWorthAnotherTry(error: unknown): boolean {
  return WORTH_ANOTHER_TRY.has(errorNumber(error) ?? 0);
}

/** MariaDB's error number behind whatever Sequelize wrapped it in. */
function errorNumber(error: unknown): number | undefined {
  const parent = (error as { parent?: { errno?: unknown } } | null)?.parent;
  return typeof parent?.errno === 'number' ? parent.errno : undefined;
}
