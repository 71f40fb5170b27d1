import type { RunOptions } from '../workers/worker-client';
import { WorkerClient, type WorkerClientOptions } from '../workers/worker-client';
import type { LogRead, LogToRead } from './read-log';

/** What the import sees of the reader; a test may read in its own thread. */
export interface LogReaderPort {
  run(order: LogToRead, options?: RunOptions): Promise<LogRead>;
}

export type LogReader = WorkerClient<LogToRead, LogRead>;

/** Reads logs in a thread of its own: thousands of rows would hold up every board. */
export function createLogReader(
  scriptPath: string,
  options: Partial<WorkerClientOptions> = {},
): LogReader {
  return new WorkerClient({
    name: 'log reader',
    timeoutMs: 60_000,
    queue: 'in-order',
    ...options,
    scriptPath,
  });
}
