import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { proposePlan } from './propose-plan';
import { tryPrices } from './try-prices';
import { discardPlan, publishPlan } from './publish-plan';

type Names = 'proposePlan' | 'tryPrices' | 'publishPlan' | 'discardPlan';

/** Proposed routes: made, compared, published or discarded. */
export function planRoutes(context: Context): SomeHandlers<Names> {
  return {
    proposePlan: ({ params, body, person }) => proposePlan(context, person, { ...body, ...params }),

    tryPrices: ({ params, body }) => tryPrices(context, { ...body, ...params }),

    publishPlan: ({ params, body, person }) =>
      runCommand(context, orderFrom('publishPlan', person, { ...body, ...params }), (job) =>
        publishPlan(job, { ...body, ...params }),
      ),

    discardPlan: ({ params, body, person }) =>
      runCommand(context, orderFrom('discardPlan', person, { ...body, ...params }), (job) =>
        discardPlan(job, { ...body, ...params }),
      ),
  };
}
