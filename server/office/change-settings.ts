import type { BodyOf } from '@shared/contract/http';
import type { Settings } from '@shared/contract/office';
import { Refusal } from '@shared/domain/errors';
import type { Job } from '../commands/run-command';
import { insert, select } from '../db/sql';
import { readSettings } from './settings';

/** @throws Refusal `stale-version`, with the settings as they are now */
export async function changeSettings(
  job: Job,
  { commandId: _id, version, ...changes }: BodyOf<'changeSettings'>,
): Promise<Settings> {
  // Everybody who changes settings waits for one row; the first change makes it.
  await insert(
    job.sequelize,
    "INSERT IGNORE INTO settings (id, body, version) VALUES (1, '{}', 0)",
    [],
    job.tx,
  );
  await select(job.sequelize, 'SELECT id FROM settings WHERE id = 1 FOR UPDATE', [], job.tx);
  const before = await readSettings(job.sequelize, job.tx);
  if (before.version !== version)
    throw new Refusal('stale-version', 'The settings have changed meanwhile.', before);
  const { version: _before, ...next } = { ...before, ...defined(changes) };
  await insert(
    job.sequelize,
    'REPLACE INTO settings (id, body, version) VALUES (1, ?, ?)',
    [JSON.stringify(next), version + 1],
    job.tx,
  );
  job.touched.settings = true;
  job.note('settings', '1', `changed ${Object.keys(defined(changes)).join(', ') || 'nothing'}`);
  return { ...next, version: version + 1 };
}

/** Leaves out what was not sent, so that it does not wipe what stands. */
function defined<T extends object>(changes: T): { [K in keyof T]?: Exclude<T[K], undefined> } {
  return Object.fromEntries(Object.entries(changes).filter(([, value]) => value !== undefined)) as {
    [K in keyof T]?: Exclude<T[K], undefined>;
  };
}
