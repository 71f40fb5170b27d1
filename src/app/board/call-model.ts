import { DOCUMENT } from '@angular/common';
import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { CallDetail, CallRow } from '@shared/contract/calls';
import type { SentBodyOf } from '@shared/contract/http';
import { MINUTE_MS } from '@shared/domain/instant';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import { Zone } from '../core/zone';
import { changesBetween } from './call-changes';

/** Without a key or a pointer for this long nobody works on the call, and its claim runs out. */
const ACTIVE_MS = 5 * MINUTE_MS;

/** A change as a person sends it: the version and the command's id are added here. */
type Without<K extends 'amendCall' | 'answerPhoneCheck' | 'concludeCall' | 'returnToWaiting'> =
  Omit<SentBodyOf<K>, 'commandId' | 'version'>;

/** What stood in the way of the last change, and what is different since. */
export interface Setback {
  readonly words: string;
  readonly changes: readonly string[];
  readonly retry: (() => Promise<boolean>) | null;
}

/** The call that is open beside the queue: everything about it, its claim, and changes to it. */
@Injectable()
export class CallModel {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly session = inject(Session);
  private readonly zone = inject(Zone);
  private readonly document = inject(DOCUMENT);

  private readonly id = signal<string | null>(null);
  private readonly known = signal<CallDetail | null>(null);
  private readonly rowWhenRead = signal<CallRow | null>(null);
  private readonly trouble = signal<ProblemError | null>(null);
  private readonly stopped = signal<Setback | null>(null);
  private readonly pending = signal(0);
  private activeAt = 0;
  private reads = 0;
  private isRenewing = false;

  readonly detail = this.known.asReadonly();
  /** Why the call could not be read. */
  readonly problem = this.trouble.asReadonly();
  readonly setback = this.stopped.asReadonly();
  readonly isBusy = computed(() => this.pending() > 0);
  private readonly underWay = new Set<Promise<boolean>>();

  /**
   * The newest row that anybody has told us of. A claim changes no version, so the row that came
   * last counts: the board's once it is another than it was when the call was fetched.
   */
  readonly row = computed<CallRow | null>(() => {
    const detail = this.known();
    const onBoard = this.board.calls().get(this.id() ?? '') ?? null;
    if (!detail || detail.row.id !== this.id()) return onBoard;
    if (!onBoard || onBoard.version < detail.row.version) return detail.row;
    return onBoard === this.rowWhenRead() ? detail.row : onBoard;
  });

  /** Who holds the call now; a lease that has run out holds nothing. */
  readonly claim = computed(() => {
    const claim = this.row()?.claim ?? null;
    return claim && claim.until > this.clock.now() ? claim : null;
  });
  readonly isMine = computed(() => {
    const claim = this.claim();
    return claim !== null && claim.userId === this.session.user()?.id;
  });
  readonly isAnothers = computed(() => this.claim() !== null && !this.isMine());

  constructor() {
    // The board hears of changes first; the rest of the call is then fetched.
    effect(() => {
      const row = this.row();
      const detail = this.known();
      if (row && detail && row !== detail.row && isNewer(row, detail.row)) {
        untracked(() => void this.read());
      }
    });
    effect(() => {
      const claim = this.claim();
      const now = this.clock.now();
      if (!claim || !this.isMine()) return;
      const leaseMs = (this.session.settings()?.claimMinutes ?? 10) * MINUTE_MS;
      if (claim.until - now < leaseMs / 2 && this.isActive(now)) untracked(() => void this.renew());
    });
    this.watchActivity();
  }

  open(id: string): void {
    if (id === this.id()) return;
    this.id.set(id);
    this.known.set(null);
    this.trouble.set(null);
    this.stopped.set(null);
    this.activeAt = this.clock.exact();
    void this.read();
  }

  async read(): Promise<void> {
    const callId = this.id();
    if (callId === null) return;
    const read = ++this.reads;
    try {
      const detail = await this.api.call('readCall', { params: { callId } });
      if (read === this.reads && this.id() === callId) {
        this.take(detail);
        this.trouble.set(null);
      }
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (read === this.reads) this.trouble.set(error);
    }
  }

  /**
   * Once nothing is under way any more, nor what follows from it: for an order that has to find
   * there what was sent just before.
   */
  async whenIdle(): Promise<void> {
    while (this.underWay.size > 0) await Promise.allSettled(this.underWay);
  }

  dismissSetback(): void {
    this.stopped.set(null);
  }

  /** Takes or keeps the claim. Whoever has it already keeps it; the answer says who that is. */
  takeClaim(): Promise<boolean> {
    const commandId = newId();
    return this.run((callId) =>
      this.api.call('claimCall', { params: { callId }, body: { commandId } }),
    );
  }

  releaseClaim(): Promise<boolean> {
    const commandId = newId();
    return this.run((callId) =>
      this.api.call('releaseCall', { params: { callId }, body: { commandId } }),
    );
  }

  amend(change: Without<'amendCall'>): Promise<boolean> {
    return this.versioned((callId, stamp) =>
      this.api.call('amendCall', { params: { callId }, body: { ...change, ...stamp } }),
    );
  }

  answer(answers: Without<'answerPhoneCheck'>['answers']): Promise<boolean> {
    return this.versioned((callId, stamp) =>
      this.api.call('answerPhoneCheck', { params: { callId }, body: { answers, ...stamp } }),
    );
  }

  conclude(conclusion: Without<'concludeCall'>): Promise<boolean> {
    return this.versioned((callId, stamp) =>
      this.api.call('concludeCall', { params: { callId }, body: { ...conclusion, ...stamp } }),
    );
  }

  /** @param window when the customer agreed that the next visit begins */
  returnToWaiting(
    reason: string,
    window: { readonly from: number; readonly to: number } | null = null,
  ): Promise<boolean> {
    const body = { reason, ...(window ? { window: { ...window } } : {}) };
    return this.versioned((callId, stamp) =>
      this.api.call('returnToWaiting', { params: { callId }, body: { ...body, ...stamp } }),
    );
  }

  addRemark(text: string): Promise<boolean> {
    const commandId = newId();
    return this.run((callId) =>
      this.api.call('addRemark', { params: { callId }, body: { commandId, text } }),
    );
  }

  markRead(): Promise<boolean> {
    const commandId = newId();
    return this.run((callId) =>
      this.api.call('readMessages', { params: { callId }, body: { commandId } }),
    );
  }

  send(body: string): Promise<boolean> {
    const commandId = newId();
    return this.run(async (callId) => {
      await this.api.call('sendMessage', { params: { callId }, body: { commandId, body } });
      return this.api.call('readCall', { params: { callId } });
    });
  }

  private versioned(
    send: (
      callId: string,
      stamp: { readonly commandId: string; readonly version: number },
    ) => Promise<CallDetail>,
  ): Promise<boolean> {
    const version = this.known()?.row.version;
    if (version === undefined) return Promise.resolve(false);
    const stamp = { commandId: newId(), version };
    return this.run((callId) => send(callId, stamp));
  }

  /** Sends a change. A retry after a lost answer sends the very same command. */
  private run(send: (callId: string) => Promise<CallDetail>): Promise<boolean> {
    const sending = this.sendNow(send);
    this.underWay.add(sending);
    const over = (): boolean => this.underWay.delete(sending);
    sending.then(over, over);
    return sending;
  }

  private async sendNow(send: (callId: string) => Promise<CallDetail>): Promise<boolean> {
    const callId = this.id();
    if (callId === null) return false;
    this.pending.update((count) => count + 1);
    this.stopped.set(null);
    try {
      const detail = await send(callId);
      this.board.takeReply({ kind: 'calls', calls: [detail.row] });
      if (this.id() === callId) {
        this.reads++; // An answer to an older question must not overwrite this one.
        this.take(detail);
      }
      return true;
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      await this.afterRefusal(error, () => this.run(send));
      return false;
    } finally {
      this.pending.update((count) => count - 1);
    }
  }

  private take(detail: CallDetail): void {
    this.rowWhenRead.set(this.board.calls().get(detail.row.id) ?? null);
    this.known.set(detail);
  }

  private async afterRefusal(error: ProblemError, retry: () => Promise<boolean>): Promise<void> {
    const before = this.known();
    const mayRetry = error.code === 'no-connection' || error.code === 'busy';
    if (!mayRetry) await this.read();
    const after = this.known();
    const clock = (at: number): string => this.zone.dayTime(at);
    this.stopped.set({
      words: error.message,
      changes: before && after ? changesBetween(before, after, clock) : [],
      retry: mayRetry ? retry : null,
    });
  }

  private async renew(): Promise<void> {
    if (this.isRenewing) return;
    this.isRenewing = true;
    try {
      await this.takeClaim();
    } finally {
      this.isRenewing = false;
    }
  }

  private isActive(now: number): boolean {
    return this.document.visibilityState === 'visible' && now - this.activeAt < ACTIVE_MS;
  }

  private watchActivity(): void {
    const active = (): void => {
      this.activeAt = this.clock.exact();
    };
    for (const event of ['keydown', 'pointerdown']) this.document.addEventListener(event, active);
    inject(DestroyRef).onDestroy(() => {
      for (const event of ['keydown', 'pointerdown']) {
        this.document.removeEventListener(event, active);
      }
    });
  }
}

/** A claim and unread texts change without a new version. */
const isNewer = (
  row: { readonly version: number; readonly unreadTexts: number },
  known: { readonly version: number; readonly unreadTexts: number },
): boolean => row.version > known.version || row.unreadTexts > known.unreadTexts;
