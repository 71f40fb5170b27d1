import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import {
  addStormRoad,
  changeStormRoad,
  confirmStormRoad,
  liftStormRoad,
  undoStormRoad,
} from './change-storm-roads';
import { reportStormRoad } from './report-storm-road';
import { roadStretch } from './road-stretch';

type Names =
  | 'roadStretch'
  | 'addStormRoad'
  | 'reportStormRoad'
  | 'changeStormRoad'
  | 'confirmStormRoad'
  | 'liftStormRoad'
  | 'undoStormRoad';

/** Roads as the storm has left them. The routes follow once a change is certain: see `follow-roads.ts`. */
export function stormRoadRoutes(context: Context): SomeHandlers<Names> {
  return {
    roadStretch: async ({ query: { lon, lat, toLon, toLat } }) => ({
      stretch: await roadStretch(
        context,
        [lon, lat],
        toLon === undefined || toLat === undefined ? null : [toLon, toLat],
      ),
    }),

    addStormRoad: ({ params, body, person }) =>
      runCommand(context, orderFrom('addStormRoad', person, { ...body, ...params }), (job) =>
        addStormRoad(job, params.stormId, body),
      ),

    reportStormRoad: ({ body, person }) =>
      runCommand(context, orderFrom('reportStormRoad', person, body), (job) =>
        reportStormRoad(job, context, body),
      ),

    changeStormRoad: ({ params, body, person }) =>
      runCommand(context, orderFrom('changeStormRoad', person, { ...body, ...params }), (job) =>
        changeStormRoad(job, { ...body, ...params }),
      ),

    confirmStormRoad: ({ params, body, person }) =>
      runCommand(context, orderFrom('confirmStormRoad', person, { ...body, ...params }), (job) =>
        confirmStormRoad(job, { ...body, ...params }),
      ),

    liftStormRoad: ({ params, body, person }) =>
      runCommand(context, orderFrom('liftStormRoad', person, { ...body, ...params }), (job) =>
        liftStormRoad(job, { ...body, ...params }),
      ),

    undoStormRoad: ({ params, body, person }) =>
      runCommand(
        context,
        orderFrom('undoStormRoad', person, { ...body, ...params }),
        async (job) => ({
          road: await undoStormRoad(job, { ...body, ...params }),
        }),
      ),
  };
}
