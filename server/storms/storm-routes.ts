import type { BoardPicture } from '@shared/contract/board';
import type { StormDto } from '@shared/contract/office';
import { Refusal } from '@shared/domain/errors';
import { areaDtos } from '../areas/area-rows';
import { callRows } from '../calls/call-rows';
import { BOARD } from '../commands/feed';
import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { isDuplicateOf, select } from '../db/sql';
import { asOfOneMoment } from '../db/transaction';
import type { SomeHandlers } from '../http/bind-routes';
import { lastAutomatic, proposedPlan } from '../routes/plan-rows';
import { stopDtos } from '../routes/stop-rows';
import { stormRoadDtos } from '../storm-roads/storm-road-rows';
import { technicianDtos } from '../technicians/technician-rows';
import { closeStorm } from './close-storm';
import { findStorm, listStorms, toStormDto } from './storm-queries';
import { StormRecord } from './storm-record';

type Names = 'listStorms' | 'openStorm' | 'closeStorm' | 'boardPicture';

/** Storms, and the whole picture of one. */
export function stormRoutes(context: Context): SomeHandlers<Names> {
  return {
    listStorms: async () => ({ storms: await listStorms() }),

    openStorm: ({ body, person }) =>
      runCommand(context, orderFrom('openStorm', person, body), async (job): Promise<StormDto> => {
        try {
          const storm = await StormRecord.create(
            { id: body.stormId, name: body.name, openedAt: job.at },
            { transaction: job.tx },
          );
          job.inStorm(storm.id);
          job.touched.storm = true;
          job.note('storm', storm.id, 'opened the storm');
          return toStormDto(storm);
        } catch (error) {
          if (isDuplicateOf(error, 'one_open_storm'))
            throw new Refusal(
              'storm-already-open',
              'A storm is open already. Close it before you open another.',
            );
          throw error;
        }
      }),

    closeStorm: ({ params, body, person }) =>
      runCommand(context, orderFrom('closeStorm', person, { ...body, ...params }), (job) =>
        closeStorm(job, { ...body, ...params }),
      ),

    boardPicture: ({ params }) => boardPicture(context, params.stormId),
  };
}

/** Everything of a storm as of one moment, with the number of the last change that it holds. */
export function boardPicture(context: Context, stormId: string): Promise<BoardPicture> {
  const now = context.clock();
  return asOfOneMoment(context.sequelize, async (tx) => {
    const storm = await findStorm(stormId, tx);
    // The number is read in the same snapshot as the rows: no change falls between them.
    const [feed] = await select<{ n: number }>(
      context.sequelize,
      'SELECT n FROM feeds WHERE storm_id = ? AND stream = ?',
      [stormId, BOARD],
      tx,
    );
    return {
      n: Number(feed?.n ?? 0),
      serverNow: now,
      storm: toStormDto(storm),
      calls: await callRows(context.sequelize, { stormId }, now, tx),
      technicians: await technicianDtos(context.sequelize, 'all', tx),
      stops: await stopDtos(context.sequelize, { stormId }, tx),
      areas: await areaDtos(context.sequelize, { stormId }, tx),
      stormRoads: await stormRoadDtos({ stormId, now }, tx),
      plan: await proposedPlan(stormId, tx),
      automaticDone: await lastAutomatic(stormId, tx),
    };
  });
}
