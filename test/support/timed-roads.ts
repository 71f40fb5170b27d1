import type { BuiltRoads } from '@shared/domain/roads/build-graph';
import { USUAL_FACTORS, type RoadFactors } from '@shared/domain/roads/conditions';
import { withWaysDown } from '@shared/domain/roads/hierarchy';
import { emptyTimes, workIn } from '@shared/domain/roads/hierarchy-times';
import { laneTimes } from '@shared/domain/roads/lane-times';
import type { TimedRoads } from '@shared/domain/roads/quickest-way';
import { searchArcs } from '@shared/domain/roads/search-arcs';
import { NO_COVER, type StormCover } from '@shared/domain/roads/storm-cover';

/** Roads with all that it takes to find drives, under some conditions. */
export function timedRoads(
  { graph, stored }: Pick<BuiltRoads, 'graph' | 'stored'>,
  factors: RoadFactors = USUAL_FACTORS,
  cover: StormCover = NO_COVER,
): TimedRoads {
  const hierarchy = withWaysDown(stored);
  const lanes = laneTimes(graph, factors, cover);
  const times = emptyTimes(hierarchy.upHead.length);
  workIn(hierarchy, graph, lanes.laneMs, times);
  return { graph, hierarchy, lanes, times, search: searchArcs(hierarchy, times) };
}
