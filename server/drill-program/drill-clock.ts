import { setTimeout as sleep } from 'node:timers/promises';

/** The drill's time, in seconds of the made-up storm; it runs `speed` times as fast as the server's. */
export class DrillClock {
  private readonly began = performance.now();

  constructor(
    readonly speed: number,
    /** The drill's time at its beginning. */
    private readonly from: number,
    readonly signal: AbortSignal,
  ) {}

  now(): number {
    return this.from + ((performance.now() - this.began) / 1000) * this.speed;
  }

  /** @returns false when the drill was ended meanwhile */
  async until(time: number): Promise<boolean> {
    return this.wait(time - this.now());
  }

  async wait(seconds: number): Promise<boolean> {
    try {
      await sleep(Math.max(0, (seconds / this.speed) * 1000), undefined, { signal: this.signal });
      return true;
    } catch {
      return false;
    }
  }
}
