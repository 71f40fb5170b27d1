import { Worker } from 'node:worker_threads';

export type WorkerFailure =
  'crashed' | 'timeout' | 'cancelled' | 'superseded' | 'closed' | 'refused';

/** A request that brought no answer, and why. */
export class WorkerError extends Error {
  constructor(
    readonly failure: WorkerFailure,
    message: string,
  ) {
    super(message);
    this.name = 'WorkerError';
  }
}

export interface WorkerClientOptions {
  /** Bundled script (CommonJS) that calls `serveRequests`. */
  readonly scriptPath: string;
  /** For messages and for the thread list of a debugger. */
  readonly name: string;
  readonly timeoutMs: number;
  /**
   * While one request runs the others wait: all of them in their order, or only the latest, for work
   * whose earlier answers nobody needs any more.
   */
  readonly queue: 'in-order' | 'latest-wins';
  /** How long a worker may take to notice that it should stop, before it is ended by force. */
  readonly graceMs?: number;
  /** Told when the thread ends by itself. */
  readonly onCrash?: (error: Error) => void;
}

export interface RunOptions {
  readonly signal?: AbortSignal;
  readonly timeoutMs?: number;
}

/** Shared with the thread: requests up to this number should stop. */
export interface WorkerSetup {
  readonly stopped: Int32Array;
}
export interface Sent<Request> {
  readonly id: number;
  readonly request: Request;
}
export type Reply<Response> =
  | { readonly id: number; readonly isOk: true; readonly response: Response }
  | { readonly id: number; readonly isOk: false; readonly name: string; readonly message: string };

interface Job<Request, Response> extends Sent<Request> {
  readonly timeoutMs: number;
  readonly resolve: (response: Response) => void;
  readonly reject: (error: WorkerError) => void;
  /** Answered, failed or given up: its promise is settled. */
  isSettled: boolean;
  timer?: NodeJS.Timeout;
  readonly forget: () => void;
}

const DEFAULT_GRACE_MS = 2000;

/**
 * One persistent thread that answers one request at a time, so that long work never holds up the
 * event loop. The thread starts at once and is started again after a crash; a thread that does not
 * stop when told is ended.
 */
export class WorkerClient<Request, Response> {
  private worker: Worker | null = null;
  private current: Job<Request, Response> | null = null;
  private waiting: Job<Request, Response>[] = [];
  private lastId = 0;
  private isClosed = false;
  /** Whether this thread has answered yet: one that cannot even start is not started in a loop. */
  private hasAnswered = false;
  private readonly stopped = new Int32Array(new SharedArrayBuffer(4));

  constructor(private readonly options: WorkerClientOptions) {
    this.start();
  }

  run(request: Request, { signal, timeoutMs }: RunOptions = {}): Promise<Response> {
    return new Promise((resolve, reject) => {
      if (this.isClosed) return reject(this.error('closed', 'is closed'));
      if (signal?.aborted) return reject(this.error('cancelled', 'was not asked'));
      const onAbort = (): void => this.giveUp(job, this.error('cancelled', 'was told to stop'));
      const job: Job<Request, Response> = {
        id: ++this.lastId,
        request,
        timeoutMs: timeoutMs ?? this.options.timeoutMs,
        resolve,
        reject,
        isSettled: false,
        forget: () => signal?.removeEventListener('abort', onAbort),
      };
      signal?.addEventListener('abort', onAbort, { once: true });
      if (this.options.queue === 'latest-wins') {
        for (const older of this.waiting) {
          this.settle(older, () => older.reject(this.error('superseded', 'has a newer request')));
        }
        this.waiting = [];
      }
      this.waiting.push(job);
      this.sendNext();
    });
  }

  /** Ends the thread; whatever is still open fails. */
  async close(): Promise<void> {
    this.isClosed = true;
    const { worker } = this;
    this.failAll(this.error('closed', 'is closed'));
    this.worker = null;
    await worker?.terminate();
  }

  private start(): void {
    const setup: WorkerSetup = { stopped: this.stopped };
    const worker = new Worker(this.options.scriptPath, {
      workerData: setup,
      name: this.options.name,
    });
    worker.on('message', (reply: Reply<Response>) => this.receive(worker, reply));
    worker.on('error', (error) => this.lose(worker, error));
    worker.on('exit', (code) => this.lose(worker, new Error(`ended with code ${code}`)));
    // An idle worker must not keep the process alive.
    worker.unref();
    this.worker = worker;
    this.hasAnswered = false;
  }

  private sendNext(): void {
    if (this.current || this.isClosed) return;
    const job = this.waiting.shift();
    if (!job) return;
    if (!this.worker) this.start();
    this.current = job;
    this.worker!.ref();
    job.timer = setTimeout(
      () => this.giveUp(job, this.error('timeout', `took more than ${job.timeoutMs} ms`)),
      job.timeoutMs,
    );
    try {
      const sent: Sent<Request> = { id: job.id, request: job.request };
      this.worker!.postMessage(sent);
    } catch (error) {
      // The request holds something that cannot be copied to a thread, such as a function.
      this.current = null;
      clearTimeout(job.timer);
      this.worker!.unref();
      this.settle(job, () => job.reject(this.error('refused', String(error))));
      this.sendNext();
    }
  }

  private receive(worker: Worker, reply: Reply<Response>): void {
    const job = this.current;
    if (worker !== this.worker || !job || reply.id !== job.id) return;
    this.hasAnswered = true;
    this.current = null;
    clearTimeout(job.timer);
    worker.unref();
    this.settle(job, () =>
      reply.isOk
        ? job.resolve(reply.response)
        : job.reject(this.error('refused', `${reply.name}: ${reply.message}`)),
    );
    this.sendNext();
  }

  /** The one who asked no longer waits; the thread may take a moment to notice. */
  private giveUp(job: Job<Request, Response>, error: WorkerError): void {
    if (job.isSettled) return;
    this.settle(job, () => job.reject(error));
    this.waiting = this.waiting.filter((one) => one !== job);
    if (this.current !== job) return;
    Atomics.store(this.stopped, 0, job.id);
    const { worker } = this;
    clearTimeout(job.timer);
    job.timer = setTimeout(() => {
      if (this.current !== job || this.worker !== worker) return;
      this.current = null;
      this.worker = null;
      void worker?.terminate();
      if (!this.isClosed) this.start();
      this.sendNext();
    }, this.options.graceMs ?? DEFAULT_GRACE_MS);
  }

  private lose(worker: Worker, cause: Error): void {
    if (worker !== this.worker) return;
    this.worker = null;
    const job = this.current;
    this.current = null;
    if (job) {
      clearTimeout(job.timer);
      this.settle(job, () => job.reject(this.error('crashed', `crashed: ${cause.message}`)));
    }
    this.options.onCrash?.(cause);
    if (this.hasAnswered && !this.isClosed) this.start();
    this.sendNext();
  }

  private failAll(error: WorkerError): void {
    const open = [...(this.current ? [this.current] : []), ...this.waiting];
    this.current = null;
    this.waiting = [];
    for (const job of open) {
      clearTimeout(job.timer);
      this.settle(job, () => job.reject(error));
    }
  }

  private settle(job: Job<Request, Response>, settle: () => void): void {
    if (job.isSettled) return;
    job.isSettled = true;
    job.forget();
    settle();
  }

  private error(failure: WorkerFailure, words: string): WorkerError {
    return new WorkerError(failure, `The worker "${this.options.name}" ${words}.`);
  }
}
