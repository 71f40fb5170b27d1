import type { CrewChange } from '@shared/domain/forecast/crew-change';
import type { ForecastFacts } from '@shared/domain/forecast/facts';
import type { Forecast } from '@shared/domain/forecast/forecast';
import { WorkerClient, type WorkerClientOptions } from './worker-client';

export interface ForecastRequest {
  readonly facts: ForecastFacts;
  readonly seed: number;
  /** Left out: only how it goes as it is. */
  readonly change?: CrewChange;
}

export interface ForecastResponse extends Forecast {
  readonly elapsedMs: number;
}

export type ForecastWorker = WorkerClient<ForecastRequest, ForecastResponse>;

export function createForecastWorker(
  scriptPath: string,
  options: Partial<WorkerClientOptions> = {},
): ForecastWorker {
  return new WorkerClient({
    name: 'forecast',
    timeoutMs: 30_000,
    queue: 'in-order',
    ...options,
    scriptPath,
  });
}
