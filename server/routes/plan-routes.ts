import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { unbuilt } from '../http/unbuilt';

type Names = 'proposePlan' | 'publishPlan' | 'discardPlan';

export function planRoutes(_context: Context): SomeHandlers<Names> {
  return unbuilt('proposePlan', 'publishPlan', 'discardPlan');
}
