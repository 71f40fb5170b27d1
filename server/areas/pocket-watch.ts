import type { Context } from '../context';
import { pocketsOf } from './pockets';

/** A burst of calls makes one new set of pockets, not fifty. */
const SETTLE_MS = 1500;

/** Works pockets out again when calls have changed, and tells the boards. */
export class PocketWatch {
  private readonly timers = new Map<string, NodeJS.Timeout>();

  constructor(private readonly context: Context) {}

  callsChanged(stormId: string): void {
    if (this.timers.has(stormId)) return;
    const timer = setTimeout(() => {
      this.timers.delete(stormId);
      pocketsOf(this.context, stormId).then(
        (pockets) => this.context.live.pocketsChanged(stormId, pockets),
        // A newer picture took its place, or the database is away: the next change tries again.
        (error: unknown) => this.context.log.debug({ err: error }, 'no pockets this time'),
      );
    }, SETTLE_MS);
    timer.unref();
    this.timers.set(stormId, timer);
  }

  stop(): void {
    for (const timer of this.timers.values()) clearTimeout(timer);
    this.timers.clear();
  }
}
