import type { CallMark, DrawnMark } from '../call-mark';
import type { AreaShape } from '../paint-areas';
import type { PocketShape } from '../paint-pockets';
import type { StormRoadMark } from '../paint-storm-roads';
import type { TownMark } from '../paint-towns';
import type { ProposedRoute, RouteShape } from '../route-shape';

/** What the map shows, but for what moves with the pointer. A layer that is left out is empty. */
export interface MapScene<Mark extends DrawnMark = CallMark> {
  /** In the order of the queue. */
  readonly marks: readonly Mark[];
  readonly areas: readonly AreaShape[];
  readonly stormRoads: readonly StormRoadMark[];
  readonly pockets: readonly PocketShape[];
  readonly routes: readonly RouteShape[];
  readonly proposal: readonly ProposedRoute[];
  readonly towns: readonly TownMark[];
  readonly hasRoutes: boolean;
  readonly hasTechnicians: boolean;
  readonly chosenPocketKey: string | null;
  readonly chosenTechnicianId: string | null;
}

export const EMPTY_SCENE: MapScene<never> = {
  marks: [],
  areas: [],
  stormRoads: [],
  pockets: [],
  routes: [],
  proposal: [],
  towns: [],
  hasRoutes: false,
  hasTechnicians: false,
  chosenPocketKey: null,
  chosenTechnicianId: null,
};
