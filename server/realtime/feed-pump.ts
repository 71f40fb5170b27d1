import type { Logger } from 'pino';
import type { Sequelize } from 'sequelize';
import { HOUR_MS } from '@shared/domain/instant';
import { select } from '../db/sql';
import { changesAfter } from './feed-reader';

/** How often to look for changes that another process committed, in milliseconds. */
const LOOK_MS = 1000;
/** How long the streams of a storm that is no longer open are still looked at. */
const LINGER_MS = HOUR_MS;

interface StreamEnd {
  storm_id: string;
  stream: string;
  n: number;
  state: 'open' | 'closed';
}
type Emit = (stormId: string, stream: string, n: number, change: unknown) => void;

/**
 * Reads every stream in its numbered order and hands each change on once. A ring after a commit
 * makes it look at once; looking now and then finds what other processes wrote. Because it reads
 * what is committed, two commands that commit at the same moment are still told in order.
 */
export class FeedPump {
  /** The newest change handed on, by stream. */
  private readonly told = new Map<string, number>();
  /** Storms that were open or rung for lately, and when, by this process's own clock. */
  private readonly lately = new Map<string, number>();
  private running: Promise<void> | null = null;
  private again = false;
  private timer: NodeJS.Timeout | null = null;

  constructor(
    private readonly sequelize: Sequelize,
    private readonly log: Logger,
    private readonly emit: Emit,
  ) {}

  /** Starts from the ends of all streams: clients fetch what came before by themselves. */
  async start(): Promise<void> {
    for (const { storm_id, stream, n } of await this.ends('all'))
      this.told.set(key(storm_id, stream), Number(n));
    this.timer = setInterval(() => this.ring(), LOOK_MS);
    this.timer.unref();
  }

  ring(stormId?: string): void {
    if (stormId !== undefined) this.lately.set(stormId, performance.now());
    this.again = true;
    this.running ??= this.run().finally(() => (this.running = null));
  }

  async stop(): Promise<void> {
    if (this.timer) clearInterval(this.timer);
    await this.running;
  }

  private async run(): Promise<void> {
    while (this.again) {
      this.again = false;
      try {
        await this.pump();
      } catch (error) {
        // The database is away; the next look tries again and clients see no gap.
        this.log.warn({ err: error }, 'could not read the feed');
      }
    }
  }

  private async pump(): Promise<void> {
    for (const { storm_id, stream, n } of await this.ends('lately')) {
      const known = this.told.get(key(storm_id, stream)) ?? 0;
      if (Number(n) <= known) continue;
      for (const one of await changesAfter<unknown>(this.sequelize, storm_id, stream, known)) {
        this.emit(storm_id, stream, one.n, one.change);
        this.told.set(key(storm_id, stream), one.n);
        // More than one batch may be waiting.
        if (one.n < Number(n)) this.again = true;
      }
    }
  }

  private async ends(which: 'all' | 'lately'): Promise<StreamEnd[]> {
    const now = performance.now();
    for (const [stormId, at] of this.lately) if (now - at > LINGER_MS) this.lately.delete(stormId);
    const rows = await select<StreamEnd>(
      this.sequelize,
      `SELECT f.storm_id, f.stream, f.n, s.state FROM feeds f JOIN storms s ON s.id = f.storm_id
        ${which === 'all' ? '' : "WHERE s.state = 'open' OR s.id IN (?)"}`,
      which === 'all' ? [] : [[...this.lately.keys(), '']],
    );
    // The change that closes a storm has to go out too, and so do those that come after it.
    for (const { storm_id, state } of rows) if (state === 'open') this.lately.set(storm_id, now);
    return rows;
  }
}

const key = (stormId: string, stream: string): string => `${stormId} ${stream}`;
