import type { AreaDto, AreaShape } from '@shared/contract/areas';
import { Refusal } from '@shared/domain/errors';
import { crossesItself } from '@shared/domain/outage-shape';
import { orderFrom, runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { refuseImpossibleTimes } from '../calls/take-call';
import { lockOpenStorm } from '../storms/storm-queries';
import { AreaRecord } from './area-record';
import { toAreaDto } from './area-rows';
import { callsFollowAreas } from './calls-follow-areas';
import { shapeOfFeeders } from './feeder-shape';
import { pocketsOf } from './pockets';
import { roadLines } from './road-lines';

type Names = 'drawArea' | 'changeArea' | 'removeArea' | 'feederShape' | 'roadLines' | 'pockets';

/** Outage areas, the pockets that open calls form, and the ways between them. */
export function areaRoutes(context: Context): SomeHandlers<Names> {
  return {
    drawArea: ({ params, body, person }) =>
      runCommand(
        context,
        orderFrom('drawArea', person, { ...body, ...params }),
        async (job): Promise<AreaDto> => {
          refuseCrossing(body.shape);
          refuseTimes(job, body.outAt, body.backAt);
          await lockOpenStorm(params.stormId, job.tx);
          job.inStorm(params.stormId);
          const area = await AreaRecord.create(
            {
              id: body.areaId,
              stormId: params.stormId,
              name: body.name,
              shape: JSON.stringify(body.shape),
              outAt: new Date(body.outAt),
              backAt: body.backAt === null ? null : new Date(body.backAt),
            },
            { transaction: job.tx },
          );
          const moved = await callsFollowAreas(job, params.stormId);
          job.touched.areas.add(area.id);
          job.note('area', area.id, `drew an outage area; ${followWords(moved)}`);
          return toAreaDto(area);
        },
      ),

    changeArea: ({ params, body, person }) =>
      runCommand(
        context,
        orderFrom('changeArea', person, { ...body, ...params }),
        async (job): Promise<AreaDto> => {
          const area = await lockArea(job, params.areaId, body.version);
          if (body.shape) refuseCrossing(body.shape);
          area.set({
            ...(body.name === undefined ? {} : { name: body.name }),
            ...(body.shape === undefined ? {} : { shape: JSON.stringify(body.shape) }),
            ...(body.outAt === undefined ? {} : { outAt: new Date(body.outAt) }),
            ...(body.backAt === undefined
              ? {}
              : { backAt: body.backAt === null ? null : new Date(body.backAt) }),
            version: area.version + 1,
          });
          refuseTimes(job, area.outAt.getTime(), area.backAt?.getTime() ?? null);
          await area.save({ transaction: job.tx });
          const moved = await callsFollowAreas(job, area.stormId);
          job.touched.areas.add(area.id);
          job.note('area', area.id, `changed an outage area; ${followWords(moved)}`);
          return toAreaDto(area);
        },
      ),

    removeArea: ({ params, body, person }) =>
      runCommand(
        context,
        orderFrom('removeArea', person, { ...body, ...params }),
        async (job): Promise<{ done: true }> => {
          const area = await lockArea(job, params.areaId, body.version);
          const { stormId } = area;
          await area.destroy({ transaction: job.tx });
          const moved = await callsFollowAreas(job, stormId);
          job.touched.areasGone.add(params.areaId);
          job.note(
            'area',
            params.areaId,
            `removed an outage area; ${moved === 1 ? '1 call changes' : `${String(moved)} calls change`}`,
          );
          return { done: true };
        },
      ),

    feederShape: async ({ query }) => ({
      shape: shapeOfFeeders(context.region.power, query.ids.split(',')),
    }),

    roadLines: async ({ query }) => ({ lines: await roadLines(context.roads, query.drives) }),

    pockets: async ({ params }) => ({ pockets: await pocketsOf(context, params.stormId) }),
  };
}

const followWords = (calls: number): string =>
  calls === 1 ? '1 call follows' : `${String(calls)} calls follow`;

/** The area, with its storm locked first: areas of a storm change one after the other. */
async function lockArea(job: Job, areaId: string, version: number): Promise<AreaRecord> {
  const found = await AreaRecord.findByPk(areaId, { transaction: job.tx });
  if (!found) throw new Refusal('not-found', 'There is no such outage area.');
  await lockOpenStorm(found.stormId, job.tx);
  const area = await AreaRecord.findByPk(areaId, { transaction: job.tx, lock: job.tx.LOCK.UPDATE });
  if (!area) throw new Refusal('not-found', 'The outage area was removed just now.');
  job.inStorm(area.stormId);
  if (area.version !== version)
    throw new Refusal('stale-version', `"${area.name}" has changed.`, toAreaDto(area));
  return area;
}

function refuseTimes(job: Job, outAt: number, backAt: number | null): void {
  refuseImpossibleTimes({ powerOutAt: outAt, powerBackAt: backAt, powerOnSpans: [] }, job.now);
}

function refuseCrossing(shape: AreaShape): void {
  if (shape.some((rings) => crossesItself(rings)))
    throw new Refusal('outline-crosses-itself', 'The outline crosses itself. Draw it again.');
}
