import type { PlannerRequest, PlannerResponse } from './planner-client';
import type { PocketsRequest, PocketsResponse } from './pockets-client';
import type { RunOptions } from './worker-client';

/** What commands see of the planner; a test may answer in its own thread. */
export interface PlannerPort {
  run(request: PlannerRequest, options?: RunOptions): Promise<PlannerResponse>;
}

/** What queries see of the pockets. */
export interface PocketsPort {
  run(request: PocketsRequest, options?: RunOptions): Promise<PocketsResponse>;
}
