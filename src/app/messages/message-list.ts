import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  type ElementRef,
  inject,
  linkedSignal,
  output,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { MessageDto } from '@shared/contract/messages';
import { formatPhone } from '@shared/domain/phone-number';
import { ColdRuler } from '../board/cold-ruler';
import { ColdStrip } from '../board/cold-strip';
import { stripFactsOf } from '../board/cold-strip-scale';
import { EMPTY_ORDER, type HeldOrder, heldWords, nextOrder, takeOrder } from '../board/held-order';
import { whenWords } from '../board/time-words';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';
import { milestoneWords, TEXT_STATES } from './message-words';
import { MessagesModel } from './messages-model';
import type { TextThread } from './text-threads';

/** What a row stands for: a text that waits for a person, or a thread. */
export type ListEntry =
  | { readonly kind: 'need'; readonly phone: string; readonly messageId: string }
  | { readonly kind: 'thread'; readonly phone: string };

/**
 * What needs a person, then the threads, newest first. While somebody reads or works in the list
 * its order is held, as in the queue.
 */
@Component({
  selector: 'thaw-message-list',
  imports: [ColdRuler, ColdStrip, MatIcon],
  templateUrl: './message-list.html',
  styleUrls: ['../intake/fields.scss', './message-list.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MessageListView {
  protected readonly model = inject(MessagesModel);
  private readonly board = inject(BoardStore);
  protected readonly clock = inject(Clock);
  private readonly zone = inject(Zone);

  readonly opened = output<ListEntry>();

  private readonly box = viewChild<ElementRef<HTMLElement>>('box');
  private readonly isPointed = signal(false);
  private readonly isFocused = signal(false);
  private readonly placed = signal<string | null>(null);

  private readonly byPhone = computed(
    () => new Map(this.model.threads().map((thread) => [thread.phone, thread])),
  );
  private readonly live = computed(() => [
    ...this.model.needPerson().map(({ id }) => NEED + id),
    ...this.model.threads().map(({ phone }) => THREAD + phone),
  ]);
  private readonly taken = signal(0);
  private readonly order = linkedSignal<OrderSource, HeldOrder>({
    source: () => ({
      live: this.live(),
      held: this.isPointed() || this.isFocused(),
      taken: this.taken(),
    }),
    computation: ({ live, held, taken }, previous) =>
      taken !== (previous?.source.taken ?? 0)
        ? takeOrder(live)
        : nextOrder(previous?.value ?? EMPTY_ORDER, live, held),
  });
  protected readonly held = computed(() => heldWords(this.order()));
  readonly hasHeld = computed(() => this.held() !== '');

  protected readonly needs = computed(() =>
    this.order().ids.flatMap((id) => {
      const message = id.startsWith(NEED) ? this.model.byId().get(id.slice(NEED.length)) : null;
      return message ? [this.needRow(id, message)] : [];
    }),
  );
  protected readonly threads = computed(() =>
    this.order().ids.flatMap((id) => {
      const thread = id.startsWith(THREAD) ? this.byPhone().get(id.slice(THREAD.length)) : null;
      return thread ? [this.threadRow(id, thread)] : [];
    }),
  );
  protected readonly hasStrips = computed(() => this.threads().some(({ strip }) => strip !== null));
  private readonly ids = computed(() => [...this.needs(), ...this.threads()].map(({ id }) => id));
  /** The row under the cursor; the next one when it has gone. */
  readonly cursor = linkedSignal<readonly string[], string | null>({
    source: () => this.ids(),
    computation: (ids, previous) => {
      const at = previous?.value ?? null;
      if (at === null || ids.includes(at)) return at;
      const was = previous?.source.indexOf(at) ?? 0;
      return ids[Math.min(was, ids.length - 1)] ?? null;
    },
  });

  constructor() {
    effect(() => {
      const id = this.placed();
      untracked(() => {
        if (id !== null) document.getElementById(id)?.scrollIntoView({ block: 'nearest' });
      });
    });
  }

  focus(): void {
    this.box()?.nativeElement.focus();
  }

  /** Whether the rows have the keyboard. */
  hasFocus(): boolean {
    return this.isFocused();
  }

  move(step: number): void {
    const ids = this.ids();
    const cursor = this.cursor();
    const from = cursor === null ? (step > 0 ? -1 : ids.length) : ids.indexOf(cursor);
    const to = Math.min(Math.max(from + step, 0), ids.length - 1);
    this.put(ids[to] ?? null);
    this.focus();
  }

  openCursor(): void {
    const cursor = this.cursor();
    if (cursor !== null) this.open(cursor);
  }

  takeNewOrder(): void {
    this.taken.update((count) => count + 1);
  }

  /** Puts the cursor on the thread with a phone, as after it was opened from elsewhere. */
  show(phone: string): void {
    this.put(THREAD + phone);
  }

  protected point(isPointed: boolean): void {
    this.isPointed.set(isPointed);
  }

  protected arrive(): void {
    this.isFocused.set(true);
    if (this.cursor() === null) this.put(this.ids()[0] ?? null);
  }

  protected leave(): void {
    this.isFocused.set(false);
  }

  protected press(event: KeyboardEvent): void {
    if (event.ctrlKey || event.altKey || event.metaKey) return;
    const step = STEPS[event.key];
    if (step === undefined) return;
    event.preventDefault();
    this.move(step);
  }

  protected open(id: string): void {
    this.put(id);
    if (id.startsWith(THREAD)) {
      this.opened.emit({ kind: 'thread', phone: id.slice(THREAD.length) });
      return;
    }
    const message = this.model.byId().get(id.slice(NEED.length));
    if (message) {
      this.opened.emit({ kind: 'need', phone: message.phone, messageId: message.id });
    }
  }

  private put(id: string | null): void {
    this.cursor.set(id);
    this.placed.set(id);
  }

  private needRow(id: string, message: MessageDto) {
    const waits = this.model.needsPerson().has(message.id);
    const isReply = message.direction === 'in';
    const state = isReply ? REPLY_WITHOUT_CALL : TEXT_STATES[message.state];
    const trouble = isReply || message.trouble === null ? '' : `: ${message.trouble}`;
    return {
      id,
      who: this.nameOf(message.phone, message.callId),
      when: this.when(message.at),
      body: message.body,
      icon: waits ? state.icon : ('check' as const),
      words: waits ? `${state.words}${trouble}` : 'looked after',
      waits,
    };
  }

  private threadRow(id: string, { phone, callId, call, last, unread, at }: TextThread) {
    const state = last ? TEXT_STATES[last.state] : null;
    const milestone = last ? milestoneWords(last) : '';
    return {
      id,
      who: call?.name ?? this.nameOf(phone, callId),
      number: call ? `Call ${call.number}` : 'No call on the board',
      when: this.when(at),
      body: last ? withoutCompany(last) : 'Texts that nobody has read',
      from: last?.direction === 'out' ? 'We: ' : '',
      icon: state?.icon ?? ('message' as const),
      words: [state?.words, milestone].filter(Boolean).join(' · '),
      isTrouble: state?.isTrouble ?? false,
      unread,
      strip: call && call.settledAt === null ? stripFactsOf(call) : null,
    };
  }

  private nameOf(phone: string, callId: string | null): string {
    return this.board.calls().get(callId ?? '')?.name ?? formatPhone(phone);
  }

  private when(at: number): string {
    return whenWords(at, this.clock.now(), this.zone.name());
  }
}

interface OrderSource {
  readonly live: readonly string[];
  readonly held: boolean;
  /** Counts how often the new order was asked for. */
  readonly taken: number;
}

const REPLY_WITHOUT_CALL = { icon: 'message', words: 'belongs to no open call' } as const;

/** Each of our own texts begins with the company's name, which no list has to repeat. */
function withoutCompany({ body, milestone }: MessageDto): string {
  const end = milestone === null ? -1 : body.indexOf(': ');
  return end < 0 ? body : body.slice(end + 2);
}

const NEED = 'need-';
const THREAD = 'thread-';

const STEPS: Readonly<Record<string, number>> = {
  ArrowDown: 1,
  ArrowUp: -1,
  PageDown: 8,
  PageUp: -8,
  Home: -Infinity,
  End: Infinity,
};
