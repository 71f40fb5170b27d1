import { buildRoads } from '@shared/domain/roads/build-graph';
import type { MakingStep } from './region-making';
import { writeRoads } from './road-file';
import { roadNetwork } from './road-network';

/** Roads for travel times: the graph and its hierarchy, in one file. */
export const ROADS_STEP: MakingStep = {
  name: 'roads',
  weight: 20,
  run: async ({ extract, folder, leaveOut }) => {
    const network = roadNetwork(extract);
    const built = buildRoads(network);
    if (built.graph.segmentCount === 0) return { roadNodes: 0, roadEdges: 0 };
    await writeRoads(folder, built, network.names);
    if (built.leftOut > 0)
      leaveOut({
        what: 'Stretches of road',
        count: built.leftOut,
        why: 'nobody can drive there and back from the rest of the region',
      });
    if (network.turnRulesLeftOut > 0)
      leaveOut({
        what: 'Turn restrictions',
        count: network.turnRulesLeftOut,
        why: 'they hold for some hours only, or name roads that are not in the file',
      });
    return { roadNodes: built.graph.nodeCount, roadEdges: built.graph.arcTail.length };
  },
};
