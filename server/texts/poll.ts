export interface Poll {
  /** Works now, or once more after the work that is going on. */
  wake(): void;
  /** Resolves when the work that is going on has ended. */
  stop(): Promise<void>;
}

/**
 * Does `work` again and again: soon after each wake, and every so often without one. Two runs
 * never overlap.
 */
export function poll(
  work: () => Promise<void>,
  everyMs: number,
  onFailure: (error: unknown) => void,
): Poll {
  let isWanted = false;
  let isStopped = false;
  let running: Promise<void> | null = null;

  const run = async (): Promise<void> => {
    while (isWanted && !isStopped) {
      isWanted = false;
      await work().catch(onFailure);
    }
  };
  const wake = (): void => {
    if (isStopped) return;
    isWanted = true;
    running ??= run().finally(() => (running = null));
  };
  const timer = setInterval(wake, everyMs);
  wake();

  return {
    wake,
    stop: async () => {
      isStopped = true;
      clearInterval(timer);
      await running;
    },
  };
}
