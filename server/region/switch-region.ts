import { randomUUID } from 'node:crypto';
import type { RegionSwitchDto } from '@shared/contract/regions';
import { Refusal } from '@shared/domain/errors';
import type { Sequelize, Transaction } from 'sequelize';
import { orderFrom, runCommand, type CommandContext, type Job } from '../commands/run-command';
import type { Actor } from '../commands/actor';
import { change, insert, select } from '../db/sql';
import type { ImportedRegion } from './import-region';
import { isReadable, keyOf } from './region-folder';

/** Which region the database says is in use, and the switch that brought it; null before any. */
export async function regionInUse(
  sequelize: Sequelize,
  tx?: Transaction,
): Promise<{ key: string; switchId: string | null } | null> {
  const [row] = await select<{ region_key: string; switch_id: string | null }>(
    sequelize,
    'SELECT region_key, switch_id FROM region_in_use WHERE id = 1',
    [],
    tx,
  );
  return row ? { key: row.region_key, switchId: row.switch_id } : null;
}

/** Notes the region that a server has started with, unless one is noted. */
export const noteRegionInUse = (sequelize: Sequelize, key: string): Promise<void> =>
  insert(
    sequelize,
    'INSERT INTO region_in_use (id, region_key) VALUES (1, ?) ON DUPLICATE KEY UPDATE id = id',
    [key],
  );

/** As `noteRegionInUse`, in the place of one that is there no more. */
export const replaceRegionInUse = (sequelize: Sequelize, key: string): Promise<void> =>
  insert(
    sequelize,
    `INSERT INTO region_in_use (id, region_key) VALUES (1, ?)
     ON DUPLICATE KEY UPDATE region_key = VALUES(region_key), switch_id = NULL`,
    [key],
  );

/**
 * Makes a region the one in use. Every server on this database takes it over; the open storm's calls
 * are then located in it.
 *
 * @throws Refusal `already-used`, `region-busy`, `region-file-refused`
 */
export function switchRegion(
  context: CommandContext,
  actor: Actor,
  asked: { readonly commandId: string; readonly key: string },
  region: ImportedRegion,
  afterCommit: (switchId: string) => void = () => undefined,
): Promise<RegionSwitchDto> {
  if (!isReadable(region))
    throw new Refusal(
      'region-file-refused',
      `${region.manifest.name} was made by an earlier version. Import it again.`,
    );
  return runCommand(context, orderFrom('useRegion', actor, asked), async (job) => {
    const before = await lockInUse(job, context.region.key);
    if (before.key === keyOf(region))
      throw new Refusal('already-used', `${region.manifest.name} is in use already.`);
    const running = before.switchId && (await findSwitch(job.sequelize, before.switchId, job.tx));
    if (running && running.state === 'locating')
      throw new Refusal(
        'region-busy',
        'Calls are still being located after the last switch. Try again in a moment.',
      );
    const [storm] = await select<{ id: string; calls_taken: number }>(
      job.sequelize,
      "SELECT id, calls_taken FROM storms WHERE state = 'open' FOR UPDATE",
      [],
      job.tx,
    );
    const id = randomUUID();
    await insert(
      job.sequelize,
      `INSERT INTO region_switches
         (id, from_key, to_key, to_name, state, storm_id, total, at, user_id)
       VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)`,
      [
        id,
        before.key,
        keyOf(region),
        region.manifest.name,
        storm ? 'locating' : 'done',
        storm?.id ?? null,
        storm?.calls_taken ?? 0,
        job.at,
        actor.userId,
      ],
      job.tx,
    );
    await change(
      job.sequelize,
      'UPDATE region_in_use SET region_key = ?, switch_id = ? WHERE id = 1',
      [keyOf(region), id],
      job.tx,
    );
    job.note('region', id, `switched to the region ${region.manifest.name}`);
    job.afterCommit(() => afterCommit(id));
    const made = await findSwitch(job.sequelize, id, job.tx);
    if (!made) throw new Error('the switch was not written');
    return made;
  });
}

/** The row of the region in use, locked; the first switch of all makes it. */
async function lockInUse(
  job: Job,
  keyNow: string,
): Promise<{ key: string; switchId: string | null }> {
  await insert(
    job.sequelize,
    'INSERT IGNORE INTO region_in_use (id, region_key) VALUES (1, ?)',
    [keyNow],
    job.tx,
  );
  await select(job.sequelize, 'SELECT id FROM region_in_use WHERE id = 1 FOR UPDATE', [], job.tx);
  const row = await regionInUse(job.sequelize, job.tx);
  if (!row) throw new Error('no region is in use');
  return row;
}

interface StoredSwitch {
  id: string;
  from_key: string | null;
  to_key: string;
  to_name: string;
  state: 'locating' | 'done';
  storm_id: string | null;
  total: number;
  done: number;
  located: number;
  returned: number;
  kept: number;
  outside: number;
  at: Date;
}

export interface RegionSwitch extends RegionSwitchDto {
  readonly fromKey: string | null;
  readonly stormId: string | null;
}

/** One switch; without an id the one that brought the region in use. */
export async function findSwitch(
  sequelize: Sequelize,
  id: string | null,
  tx?: Transaction,
): Promise<RegionSwitchDto | null> {
  const found = await readSwitch(sequelize, id, tx);
  if (!found) return null;
  const { fromKey: _from, stormId: _storm, ...dto } = found;
  return dto;
}

/** As `findSwitch`, with what its work needs. */
export async function readSwitch(
  sequelize: Sequelize,
  id: string | null,
  tx?: Transaction,
): Promise<RegionSwitch | null> {
  const [row] = await select<StoredSwitch>(
    sequelize,
    `SELECT id, from_key, to_key, to_name, state, storm_id, total, done, located, returned, kept,
            outside, at
       FROM region_switches WHERE id = ${id === null ? '(SELECT switch_id FROM region_in_use WHERE id = 1)' : '?'}`,
    id === null ? [] : [id],
    tx,
  );
  if (!row) return null;
  return {
    id: row.id,
    fromKey: row.from_key,
    toKey: row.to_key,
    toName: row.to_name,
    state: row.state,
    stormId: row.storm_id,
    total: row.total,
    done: row.done,
    located: row.located,
    returned: row.returned,
    kept: row.kept,
    outside: row.outside,
    at: row.at.getTime(),
  };
}
