import { buildRoads, type SegmentsAndTurns } from '@shared/domain/roads/build-graph';
import { writeRoads } from '../../server/region/road-file';
import {
  RoadsClient,
  type RoadsRequest,
  type RoadsWorker,
} from '../../server/workers/roads-client';
import { answerRoads, type OpenRoads } from '../../server/workers/roads-answers';
import { temporaryFolder } from './region-files';

/** Answers in the asking thread, a turn later, as a thread would. */
export function roadsInThisThread(): RoadsWorker {
  const open: OpenRoads = { engine: null };
  return {
    run: async (request: RoadsRequest) => {
      await Promise.resolve();
      return answerRoads(open, request);
    },
  };
}

/** A region's folder that holds nothing but a file of roads; `remove` it afterwards. */
export async function roadsFolder(
  map: SegmentsAndTurns,
  names: readonly string[] = [''],
): Promise<{ readonly path: string; remove(): void }> {
  const folder = temporaryFolder();
  await writeRoads(folder.path, buildRoads(map), names);
  return folder;
}

/** The roads of a made map, opened. */
export async function openMadeRoads(
  map: SegmentsAndTurns,
): Promise<{ readonly roads: RoadsClient; close(): void }> {
  const folder = await roadsFolder(map);
  const roads = new RoadsClient(roadsInThisThread());
  await roads.switchTo({ folder: folder.path, name: 'Made County' });
  return { roads, close: () => folder.remove() };
}
