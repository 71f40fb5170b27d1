import { randomUUID } from 'node:crypto';
import { machine } from '../commands/actor';
import type { Config } from '../config';
import { connect } from '../db/connect';
import { migrate } from '../db/migrate';
import { SILENT } from '../realtime/live';
import type { ImportedRegion } from './import-region';
import { openRegion } from './open-region';
import { keyOf } from './region-folder';
import { RegionHolder } from './region-in-use';
import { noteRegionInUse, regionInUse, switchRegion } from './switch-region';

const PERSON = machine('Command line');

/**
 * Makes a region the one in use. A server that runs notices it within seconds and locates the open
 * storm's calls; one that does not run does so when it starts.
 *
 * @throws Refusal when it cannot be switched to
 */
export async function useFromCommandLine(
  database: Config['database'],
  region: ImportedRegion,
): Promise<'switched' | 'in use already'> {
  const sequelize = connect(database);
  try {
    await migrate(sequelize);
    const before = await regionInUse(sequelize);
    if (before?.key === keyOf(region)) return 'in use already';
    if (!before) {
      await noteRegionInUse(sequelize, keyOf(region));
      return 'switched';
    }
    await switchRegion(
      {
        sequelize,
        clock: () => Date.now(),
        region: new RegionHolder(await openRegion(region)),
        live: SILENT,
        wakeOutbox: () => undefined,
      },
      PERSON,
      { commandId: randomUUID(), key: keyOf(region) },
      region,
    );
    return 'switched';
  } finally {
    await sequelize.close();
  }
}

/** The key of the region in use; null when nobody has started the application yet. */
export async function keyInUse(database: Config['database']): Promise<string | null> {
  const sequelize = connect(database);
  try {
    await migrate(sequelize);
    return (await regionInUse(sequelize))?.key ?? null;
  } finally {
    await sequelize.close();
  }
}
