import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { DrainDto, StormDto } from '@shared/contract/office';
import { MINUTE_MS } from '@shared/domain/instant';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';

export const BUCKETS = [10, 30, 60] as const;
export type BucketMinutes = (typeof BUCKETS)[number];

/** A storm brings changes by the second; the drain is looked at by the minute. */
const ASK_EVERY_MS = 3_000;
const ASK_AGAIN_MS = 8_000;

/**
 * The drain of one storm, kept current: asked for again when the board has changed, three seconds
 * apart at least, and once a minute, for value is lost also while nobody does anything.
 */
@Injectable()
export class DrainFeed {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly session = inject(Session);

  /** Whom the map's licence asks to name wherever something follows from it. */
  readonly attribution = computed(() => this.session.region()?.attribution ?? '');

  private readonly known = signal<DrainDto | null>(null);
  private readonly list = signal<readonly StormDto[] | null>(null);
  private readonly chosen = signal<string | null>(null);
  private readonly failure = signal<string | null>(null);
  private timer: ReturnType<typeof setTimeout> | undefined;
  private askedAt = -Infinity;
  private asked = 0;
  private shownStormId: string | null = null;
  private listTimer: ReturnType<typeof setTimeout> | undefined;

  readonly bucketMinutes = signal<BucketMinutes>(30);
  /** The newest figures; `null` before the first answer for this storm. */
  readonly drain = this.known.asReadonly();
  /** Why the newest figures could not be fetched, until they could. */
  readonly problem = this.failure.asReadonly();
  /** All storms, newest first; `null` before they are known. */
  readonly storms = this.list.asReadonly();

  /** The storm that is shown: the chosen one, else the open one, else the last. */
  readonly storm = computed<StormDto | null>(() => {
    const storms = this.list() ?? [];
    const open = this.session.storm();
    return storms.find(({ id }) => id === this.chosen()) ?? open ?? storms[0] ?? null;
  });
  /** Whether the board's changes are this storm's. */
  readonly isOpen = computed(() => this.storm()?.state === 'open');

  private readonly minute = computed(() => Math.floor(this.clock.now() / MINUTE_MS));
  private readonly stormId = computed(() => this.storm()?.id ?? null);

  constructor() {
    const destroyed = inject(DestroyRef);
    destroyed.onDestroy(() => {
      this.asked++;
      clearTimeout(this.timer);
      clearTimeout(this.listTimer);
    });
    effect(() => {
      // A storm opened, closed or renamed changes the list.
      this.session.storm();
      untracked(() => void this.fetchStorms());
    });
    effect(() => {
      const id = this.stormId();
      this.bucketMinutes();
      this.isOpen();
      untracked(() => {
        if (this.shownStormId !== id) this.known.set(null);
        this.askSoon(0);
      });
    });
    effect(() => {
      this.board.n();
      this.minute();
      untracked(() => {
        if (this.isOpen()) this.askSoon(this.askedAt + ASK_EVERY_MS - performance.now());
      });
    });
  }

  choose(stormId: string): void {
    this.chosen.set(stormId);
  }

  /** The earliest wish wins: a later one is served by the same answer. */
  private askSoon(waitMs: number): void {
    if (waitMs > 0 && this.timer !== undefined) return;
    clearTimeout(this.timer);
    this.timer = setTimeout(
      () => {
        this.timer = undefined;
        void this.ask();
      },
      Math.max(0, waitMs),
    );
  }

  private async ask(): Promise<void> {
    const stormId = this.stormId();
    const bucketMinutes = this.bucketMinutes();
    if (stormId === null) return;
    const asked = ++this.asked;
    this.askedAt = performance.now();
    try {
      const drain = await this.api.call('drain', {
        params: { stormId },
        query: { bucketMinutes: String(bucketMinutes) },
      });
      // Answers may overtake each other; only the one to the newest question counts.
      if (asked !== this.asked) return;
      this.shownStormId = stormId;
      this.known.set(drain);
      this.failure.set(null);
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (asked !== this.asked) return;
      this.failure.set(error.message);
      this.askSoon(ASK_AGAIN_MS);
    }
  }

  private async fetchStorms(): Promise<void> {
    try {
      const { storms } = await this.api.call('listStorms');
      this.list.set(storms);
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      this.failure.set(error.message);
      clearTimeout(this.listTimer);
      this.listTimer = setTimeout(() => void this.fetchStorms(), ASK_AGAIN_MS);
    }
  }
}
