import type { FeedAnswer, Numbered } from '@shared/contract/realtime';

/** What the picture on screen shows: everything up to change `n` of the storm's stream. */
export interface FeedPlace {
  readonly stormId: string;
  readonly n: number;
}

export interface FeedWork<C> {
  /** Fetches the whole picture, shows it, and says up to where it goes; `null`: there is none. */
  load(): Promise<FeedPlace | null>;
  resume(from: { stormId: string; after: number }): Promise<FeedAnswer<C>>;
  /** Shows changes, in order and without gaps. */
  apply(changes: readonly Numbered<C>[]): void;
  /** Whether what is shown is known to be current. */
  current(isCurrent: boolean): void;
  /** A change of another storm came: the one on screen may no longer be the one that is worked. */
  otherStorm(stormId: string): void;
  /** `load` or `resume` rejected with this; it is tried again later. */
  failed(error: unknown): void;
}

/** At most one write to the screen in this time, so that a burst costs one update. */
const BATCH_MS = 250;
const FIRST_RETRY_MS = 1_000;
const LAST_RETRY_MS = 20_000;
/** In one go, before waiting. */
const MOST_LOADS = 2;

/**
 * Turns announcements that may be doubled, late or missing into one gapless order. A gap and a new
 * connection are filled by asking for what came after the last change seen; when that is too much,
 * the whole picture is fetched again.
 */
export class OrderedFeed<C> {
  private place: FeedPlace | null = null;
  /** In order, seen but not yet shown. */
  private batch: Numbered<C>[] = [];
  /** Came before something that is still missing. */
  private readonly ahead = new Map<number, Numbered<C>>();
  private connected = false;
  private busy = false;
  private wanted: 'nothing' | 'resume' | 'load' = 'nothing';
  private retryMs = FIRST_RETRY_MS;
  private retryTimer: ReturnType<typeof setTimeout> | undefined;
  private batchTimer: ReturnType<typeof setTimeout> | undefined;
  private shownAt = -Infinity;
  private stopped = false;

  constructor(private readonly work: FeedWork<C>) {}

  /** Fetches the first picture; the socket may come up before or after. */
  start(): void {
    this.want('load');
  }

  stop(): void {
    this.stopped = true;
    clearTimeout(this.retryTimer);
    clearTimeout(this.batchTimer);
  }

  /** A connection is new: whatever was announced while there was none is missing. */
  connect(): void {
    this.connected = true;
    clearTimeout(this.retryTimer);
    this.retryTimer = undefined;
    this.want('resume');
  }

  disconnect(): void {
    this.connected = false;
    this.work.current(false);
  }

  /** Fetches the whole picture again. */
  startOver(): void {
    this.want('load');
  }

  receive(change: Numbered<C>): void {
    if (this.stopped) return;
    const place = this.place;
    if (!place) {
      // No picture yet; what it will not hold is asked for after it. If there was nothing to
      // show so far, then now there is.
      this.ahead.set(change.n, change);
      this.want('load');
      return;
    }
    if (change.stormId !== place.stormId) {
      this.work.otherStorm(change.stormId);
      return;
    }
    this.ahead.set(change.n, change);
    this.takeInOrder();
    if (this.ahead.size > 0) this.want('resume');
  }

  private want(what: 'resume' | 'load'): void {
    if (this.stopped) return;
    if (this.wanted !== 'load') this.wanted = what;
    if (!this.busy && this.retryTimer === undefined) void this.catchUp();
  }

  private async catchUp(): Promise<void> {
    this.busy = true;
    let loads = 0;
    try {
      while (this.wanted !== 'nothing' && !this.stopped) {
        if (this.wanted === 'load' || !this.place) {
          // A server that answers every fresh picture with "start over" must not be hammered.
          if (loads++ >= MOST_LOADS) throw new Error('The picture and its changes do not meet.');
          await this.load();
        } else if (this.connected) await this.resume(this.place);
        else break; // The next connection asks again.
      }
      this.retryMs = FIRST_RETRY_MS;
    } catch (error) {
      // No connection, no answer in time, or a refusal; the store says which.
      this.work.failed(error);
      this.retryLater();
    } finally {
      this.busy = false;
    }
  }

  private async load(): Promise<void> {
    // Only what is asked for while this is under way may set it again.
    this.wanted = this.connected ? 'resume' : 'nothing';
    const place = await this.work.load().catch((error: unknown) => {
      this.wanted = 'load';
      throw error;
    });
    if (this.stopped) return;
    this.batch = [];
    this.place = place;
    if (!place) {
      this.ahead.clear();
      this.wanted = 'nothing';
      if (this.connected) this.work.current(true);
      return;
    }
    for (const change of this.ahead.values()) {
      if (change.stormId !== place.stormId) this.ahead.delete(change.n);
    }
    this.takeInOrder();
  }

  private async resume(place: FeedPlace): Promise<void> {
    this.wanted = 'nothing';
    const answer = await this.work
      .resume({ stormId: place.stormId, after: place.n })
      .catch((error: unknown) => {
        if (this.wanted === 'nothing') this.wanted = 'resume';
        throw error;
      });
    if (this.stopped) return;
    if (answer.kind === 'start-over') {
      this.wanted = 'load';
      return;
    }
    for (const change of answer.changes) this.ahead.set(change.n, change);
    this.takeInOrder();
    if (this.ahead.size > 0) {
      // The answer left a hole: the server no longer has all of it.
      this.wanted = 'load';
      return;
    }
    if (this.connected) this.work.current(true);
  }

  /** Moves what follows on without a gap into the batch, and drops what is already shown. */
  private takeInOrder(): void {
    if (!this.place) return;
    let { n } = this.place;
    for (const seen of this.ahead.keys()) if (seen <= n) this.ahead.delete(seen);
    for (let next = this.ahead.get(n + 1); next; next = this.ahead.get(n + 1)) {
      this.ahead.delete(next.n);
      this.batch.push(next);
      n = next.n;
    }
    this.place = { ...this.place, n };
    if (this.batch.length > 0) this.showSoon();
  }

  private showSoon(): void {
    const sinceMs = performance.now() - this.shownAt;
    if (sinceMs >= BATCH_MS) this.show();
    else this.batchTimer ??= setTimeout(() => this.show(), BATCH_MS - sinceMs);
  }

  private show(): void {
    clearTimeout(this.batchTimer);
    this.batchTimer = undefined;
    if (this.stopped || this.batch.length === 0) return;
    const batch = this.batch;
    this.batch = [];
    this.shownAt = performance.now();
    this.work.apply(batch);
  }

  private retryLater(): void {
    if (this.stopped) return;
    // Spread, so that forty boards do not all ask in the second in which the server is back.
    const waitMs = this.retryMs * (0.5 + Math.random());
    this.retryMs = Math.min(this.retryMs * 2, LAST_RETRY_MS);
    this.retryTimer = setTimeout(() => {
      this.retryTimer = undefined;
      if (!this.stopped) void this.catchUp();
    }, waitMs);
  }
}
