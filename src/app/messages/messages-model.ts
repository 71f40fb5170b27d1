import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { CallDetail, HouseholdFound } from '@shared/contract/calls';
import type { MessageDto, MessageList } from '@shared/contract/messages';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import type { Decision } from './message-words';
import { isUnread, newestOf, oldestFirst, threadsOf } from './text-threads';

/** A busy night changes texts many times a second; the list is fetched no more often than this. */
const FETCH_EVERY_MS = 1_500;

/** What stood in the way of the last change. */
export interface Setback {
  readonly words: string;
  /** Sends the very same command again; `null` when that would be refused again. */
  readonly retry: (() => Promise<boolean>) | null;
}

/** The storm's texts, the thread that is open, and what is written and decided. */
@Injectable()
export class MessagesModel {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly session = inject(Session);

  private readonly sent = signal<MessageList | null>(null);
  private readonly trouble = signal<ProblemError | null>(null);
  private readonly stopped = signal<Setback | null>(null);
  private readonly pending = signal(0);
  private readonly phone = signal<string | null>(null);
  private readonly detail = signal<CallDetail | null>(null);
  private readonly found = signal<HouseholdFound | null>(null);
  private readonly opening = signal(false);
  private readonly own = signal<readonly MessageDto[]>([]);

  private fetchedAt = -Infinity;
  private fetches = 0;
  private openings = 0;
  private timer: ReturnType<typeof setTimeout> | undefined;

  readonly list = this.sent.asReadonly();
  readonly problem = this.trouble.asReadonly();
  readonly setback = this.stopped.asReadonly();
  readonly isBusy = computed(() => this.pending() > 0);
  readonly openPhone = this.phone.asReadonly();
  /** Whether the rest of the open thread is still on its way. */
  readonly isOpening = this.opening.asReadonly();

  /** Every text that is known here, in its newest version. */
  readonly byId = computed(() => {
    const list = this.sent();
    return newestOf(
      list?.recent ?? [],
      list?.needPerson ?? [],
      this.detail()?.messages ?? [],
      this.own(),
    );
  });
  /** Texts that wait for a person, oldest first. */
  readonly needPerson = computed(() =>
    (this.sent()?.needPerson ?? []).flatMap((message) => {
      const newest = this.byId().get(message.id) ?? message;
      return newest.readAt === null ? [newest] : [];
    }),
  );
  readonly needsPerson = computed(() => new Set(this.needPerson().map(({ id }) => id)));
  readonly threads = computed(() => threadsOf(this.byId().values(), this.board.calls().values()));

  readonly messages = computed(() => {
    const phone = this.phone();
    return [...this.byId().values()].filter((one) => one.phone === phone).sort(oldestFirst);
  });
  readonly thread = computed(
    () => this.threads().find((thread) => thread.phone === this.phone()) ?? null,
  );
  readonly household = computed(() => this.found()?.household ?? null);
  /** The call that a reply lands on: the household's open one, else the one that it texted about. */
  readonly replyCallId = computed(
    () => this.found()?.openCall?.id ?? this.thread()?.callId ?? null,
  );
  /** Why no text may be written; `null` when one may. */
  readonly whyNoReply = computed(() => {
    if (this.phone() === null) return null;
    if (this.household()?.optedOut) {
      return 'This phone has opted out of texts (STOP). Ring them instead.';
    }
    if (this.opening()) return null;
    if (this.replyCallId() === null)
      return 'No call belongs to this phone. Ring them, or take a call.';
    return this.detail()?.mayText === false
      ? 'This household did not agree to texts. Ring them instead.'
      : null;
  });

  constructor() {
    effect(() => {
      this.session.storm();
      this.board.messagesTick();
      // What was announced while the line was down is known only by asking.
      this.board.link();
      untracked(() => this.fetchSoon());
    });
    inject(DestroyRef).onDestroy(() => clearTimeout(this.timer));
  }

  async fetch(): Promise<void> {
    clearTimeout(this.timer);
    this.timer = undefined;
    const stormId = this.session.storm()?.id;
    if (!stormId) {
      this.sent.set(null);
      return;
    }
    this.fetchedAt = performance.now();
    const fetch = ++this.fetches;
    try {
      const list = await this.api.call('listMessages', { params: { stormId } });
      if (fetch !== this.fetches) return;
      this.sent.set(list);
      this.trouble.set(null);
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (fetch === this.fetches) this.trouble.set(error);
    }
  }

  /** Shows the texts with a phone, all of them, and marks them as read. */
  async open(phone: string | null): Promise<void> {
    if (phone === this.phone()) return;
    this.phone.set(phone);
    this.detail.set(null);
    this.found.set(null);
    this.stopped.set(null);
    const opening = ++this.openings;
    if (phone === null) {
      this.opening.set(false);
      return;
    }
    this.opening.set(true);
    try {
      const found = await this.householdOf(phone);
      if (opening !== this.openings) return;
      this.found.set(found);
      const callId = this.replyCallId();
      const detail = callId && (await this.api.call('readCall', { params: { callId } }));
      if (opening !== this.openings) return;
      if (detail) this.detail.set(detail);
      this.opening.set(false);
      await this.markRead();
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (opening !== this.openings) return;
      this.opening.set(false);
      this.stopped.set({
        words: `The thread could not be read in full. ${error.message}`,
        retry: async () => {
          this.phone.set(null);
          await this.open(phone);
          return true;
        },
      });
    }
  }

  /** Marks what the customer wrote on their calls as read. */
  async markRead(): Promise<void> {
    const calls = new Set(
      this.messages()
        .filter(isUnread)
        .flatMap(({ callId }) => callId ?? []),
    );
    for (const callId of calls) {
      const body = { commandId: newId() };
      await this.run(async () => {
        const detail = await this.api.call('readMessages', { params: { callId }, body });
        this.takeDetail(detail);
      });
    }
  }

  send(text: string): Promise<boolean> {
    const callId = this.replyCallId();
    if (callId === null) return Promise.resolve(false);
    const body = { commandId: newId(), body: text };
    return this.run(async () => {
      const message = await this.api.call('sendMessage', { params: { callId }, body });
      this.take(message);
    });
  }

  resolve(message: MessageDto, decision: Decision): Promise<boolean> {
    const body = { commandId: newId(), version: message.version, decision };
    return this.run(async () => {
      this.take(await this.api.call('resolveMessage', { params: { messageId: message.id }, body }));
    });
  }

  dismissSetback(): void {
    this.stopped.set(null);
  }

  private fetchSoon(): void {
    const wait = this.fetchedAt + FETCH_EVERY_MS - performance.now();
    if (wait <= 0) void this.fetch();
    else this.timer ??= setTimeout(() => void this.fetch(), wait);
  }

  private async householdOf(phone: string): Promise<HouseholdFound | null> {
    const stormId = this.session.storm()?.id;
    // A carrier's short number is no household's.
    if (!stormId || !/^\+[1-9]\d{6,14}$/.test(phone)) return null;
    return this.api.call('findHousehold', { params: { stormId }, query: { phone } });
  }

  /** An answer to a change is newer than what any list says. */
  private take(message: MessageDto): void {
    this.own.update((own) => [...own.filter(({ id }) => id !== message.id), message]);
    this.fetchSoon();
  }

  private takeDetail(detail: CallDetail): void {
    this.board.takeReply({ kind: 'calls', calls: [detail.row] });
    for (const message of detail.messages) this.own.update((own) => keepNewest(own, message));
    if (detail.row.id === this.detail()?.row.id) this.detail.set(detail);
  }

  private async run(change: () => Promise<void>): Promise<boolean> {
    this.pending.update((count) => count + 1);
    this.stopped.set(null);
    try {
      await change();
      return true;
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      const mayRetry = error.code === 'no-connection' || error.code === 'busy';
      this.stopped.set({ words: error.message, retry: mayRetry ? () => this.run(change) : null });
      if (!mayRetry) void this.fetch();
      return false;
    } finally {
      this.pending.update((count) => count - 1);
    }
  }
}

function keepNewest(own: readonly MessageDto[], message: MessageDto): readonly MessageDto[] {
  const known = own.find(({ id }) => id === message.id);
  if (known && known.version > message.version) return own;
  return [...own.filter(({ id }) => id !== message.id), message];
}
