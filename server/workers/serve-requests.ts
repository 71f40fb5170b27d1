import { parentPort, workerData } from 'node:worker_threads';
import type { Reply, Sent, WorkerSetup } from './worker-client';

export interface Running {
  /** Whether the one who asked no longer wants the answer; ask now and then in long work. */
  readonly shouldStop: () => boolean;
}

/** Answers the requests of the `WorkerClient` on the other side, one after the other. */
export function serveRequests<Request, Response>(
  answer: (request: Request, running: Running) => Response,
): void {
  const port = parentPort;
  if (!port) throw new Error('This file only runs as a worker thread.');
  const { stopped } = workerData as WorkerSetup;
  port.on('message', ({ id, request }: Sent<Request>) => {
    const shouldStop = (): boolean => Atomics.load(stopped, 0) >= id;
    let reply: Reply<Response>;
    try {
      reply = { id, isOk: true, response: answer(request, { shouldStop }) };
    } catch (error) {
      // A request that cannot be answered must not take the worker down with it.
      const { name, message } = error instanceof Error ? error : new Error(String(error));
      reply = { id, isOk: false, name, message };
    }
    port.postMessage(reply);
  });
}
