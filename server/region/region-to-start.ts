import type { Logger } from 'pino';
import type { Sequelize } from 'sequelize';
import type { Config } from '../config';
import { DEMO_ORIGIN, ensureDemoRegion } from './demo-region';
import type { ImportedRegion } from './import-region';
import { findRegion, isReadable, keyOf, readableRegions } from './region-folder';
import { noteRegionInUse, regionInUse, replaceRegionInUse } from './switch-region';
import { dropAbandoned } from './workshop';

/**
 * The region that a server starts with: the one that was in use, else the demo county where that is
 * asked for, else the first one that there is. Null when there is none. What imports that were killed
 * have left behind is cleared away.
 */
export async function regionToStart(
  config: Pick<Config, 'tilesFolder' | 'isDemo'>,
  sequelize: Sequelize,
  log: Logger,
): Promise<ImportedRegion | null> {
  const gone = await dropAbandoned(config.tilesFolder);
  if (gone > 0) log.info({ gone }, 'cleared away what imports had left half done');
  const noted = await regionInUse(sequelize);
  const last = noted && (await findRegion(config.tilesFolder, noted.key));
  if (last && isReadable(last) && !isOldDemo(last)) return last;
  if (noted)
    log.warn(
      { key: noted.key },
      last
        ? 'the region in use was made by an earlier version; import it again'
        : 'the region in use is not in the folder of regions any more; import it again',
    );
  const next = config.isDemo
    ? await ensureDemoRegion(config.tilesFolder, (step) => log.info(step, 'making the demo region'))
    : (await readableRegions(config.tilesFolder))[0];
  if (!next) return null;
  if (noted) await replaceRegionInUse(sequelize, keyOf(next));
  else await noteRegionInUse(sequelize, keyOf(next));
  return next;
}

/** The generator has changed since: the county is made anew. */
const isOldDemo = ({ manifest }: ImportedRegion): boolean =>
  manifest.origin !== null && manifest.origin !== DEMO_ORIGIN;
