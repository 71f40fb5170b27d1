import type {
  PocketCall,
  PocketOptions,
  PocketSummary,
} from '@shared/domain/pockets/pocket-summary';
import type { Polygon } from 'geojson';
import { WorkerClient, type WorkerClientOptions } from './worker-client';

export interface PocketsRequest {
  readonly calls: readonly PocketCall[];
  readonly options: PocketOptions;
}

/** A pocket with the outline that the map draws around its calls. */
export interface OutlinedPocket extends PocketSummary {
  readonly outline: Polygon;
}

export interface PocketsResponse {
  readonly pockets: readonly OutlinedPocket[];
  readonly elapsedMs: number;
}

export type PocketsWorker = WorkerClient<PocketsRequest, PocketsResponse>;

/** While pockets are worked out only the latest picture of the calls waits. */
export function createPocketsWorker(
  scriptPath: string,
  options: Partial<WorkerClientOptions> = {},
): PocketsWorker {
  return new WorkerClient({
    name: 'pockets',
    timeoutMs: 10_000,
    queue: 'latest-wins',
    ...options,
    scriptPath,
  });
}
