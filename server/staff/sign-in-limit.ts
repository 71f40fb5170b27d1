import type { Sequelize } from 'sequelize';
import { Refusal } from '@shared/domain/errors';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import { change, insert, select } from '../db/sql';

const FREE_FAILURES = 5;
const FREE_FAILURES_PER_ADDRESS = 20;
const FIRST_WAIT_MS = 10_000;
const LONGEST_WAIT_MS = 15 * MINUTE_MS;
/** Failures this old no longer count. */
const FORGET_AFTER_MS = 60 * MINUTE_MS;

/** How long to wait after so many failures in a row: doubling, and never for good. */
export function waitMs(failures: number, free: number): number {
  if (failures < free) return 0;
  return Math.min(LONGEST_WAIT_MS, FIRST_WAIT_MS * 2 ** (failures - free));
}

export class TooManyAttempts extends Refusal {
  constructor(readonly retryAfterSeconds: number) {
    super(
      'too-many-attempts',
      `Too many attempts. Try again in ${
        retryAfterSeconds < 90
          ? `${String(retryAfterSeconds)} seconds`
          : `${String(Math.ceil(retryAfterSeconds / 60))} minutes`
      }.`,
    );
  }
}

/** Counts failures per account and per address, in the database: a restart forgets nothing. */
export class SignInLimit {
  constructor(private readonly sequelize: Sequelize) {}

  /** @throws TooManyAttempts while either has to wait */
  async check(signInName: string, address: string, now: Instant): Promise<void> {
    const rows = await select<{ blocked_until: Date | null }>(
      this.sequelize,
      'SELECT blocked_until FROM sign_in_attempts WHERE who IN (?)',
      [keys(signInName, address)],
    );
    const until = Math.max(0, ...rows.map((row) => row.blocked_until?.getTime() ?? 0));
    if (until > now) throw new TooManyAttempts(Math.ceil((until - now) / 1000));
  }

  async failed(signInName: string, address: string, now: Instant): Promise<void> {
    const [nameKey, addressKey] = keys(signInName, address);
    await this.count(nameKey, FREE_FAILURES, now);
    await this.count(addressKey, FREE_FAILURES_PER_ADDRESS, now);
  }

  /** A right password clears the account; the address keeps its count until it ages. */
  async succeeded(signInName: string, address: string): Promise<void> {
    await change(this.sequelize, 'DELETE FROM sign_in_attempts WHERE who = ?', [
      keys(signInName, address)[0],
    ]);
  }

  private async count(who: string, free: number, now: Instant): Promise<void> {
    await insert(
      this.sequelize,
      `INSERT INTO sign_in_attempts (who, failures, last_at) VALUES (?, 1, ?)
       ON DUPLICATE KEY UPDATE failures = IF(last_at < ?, 1, failures + 1), last_at = VALUES(last_at)`,
      [who, new Date(now), new Date(now - FORGET_AFTER_MS)],
    );
    const [row] = await select<{ failures: number }>(
      this.sequelize,
      'SELECT failures FROM sign_in_attempts WHERE who = ?',
      [who],
    );
    const wait = waitMs(row?.failures ?? 0, free);
    if (wait > 0)
      await change(this.sequelize, 'UPDATE sign_in_attempts SET blocked_until = ? WHERE who = ?', [
        new Date(now + wait),
        who,
      ]);
  }
}

const keys = (signInName: string, address: string): [string, string] => [
  `name ${signInName.toLowerCase().slice(0, 120)}`,
  `address ${address.slice(0, 60)}`,
];
