import { Location } from '@angular/common';
import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  inject,
  Injector,
  input,
  untracked,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import { Router } from '@angular/router';
import type { MessageDto } from '@shared/contract/messages';
import { BoardStore } from '../core/board-store';
import { type KeyAction, Keys } from '../core/keys';
import { Session } from '../core/session';
import { IntakePrefill } from '../night-log/intake-prefill';
import { segmentWords, STATES_IN_ORDER, TEXT_STATES } from './message-words';
import { type ListEntry, MessageListView } from './message-list';
import { MessagesModel } from './messages-model';
import { ThreadView } from './thread-view';

/** All texts of the storm: what needs a person first, then the threads with households. */
@Component({
  selector: 'thaw-messages-page',
  imports: [MatIcon, MessageListView, ThreadView],
  templateUrl: './messages-page.html',
  styleUrls: ['../intake/fields.scss', './messages-page.scss'],
  providers: [MessagesModel],
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class.has-thread]': 'model.openPhone() !== null' },
})
export class MessagesPage {
  protected readonly model = inject(MessagesModel);
  protected readonly session = inject(Session);
  private readonly board = inject(BoardStore);
  private readonly router = inject(Router);
  private readonly location = inject(Location);
  private readonly injector = inject(Injector);
  private readonly prefill = inject(IntakePrefill);

  /** From the address: the call whose thread is open, so that a reload or a link opens it again. */
  readonly call = input<string>();

  private readonly list = viewChild(MessageListView);
  private readonly thread = viewChild(ThreadView);

  protected readonly states = computed(() => {
    const counts = this.model.list()?.countsByState ?? {};
    return STATES_IN_ORDER.flatMap((state) => {
      const count = counts[state] ?? 0;
      return count > 0 ? [{ state, count, ...TEXT_STATES[state] }] : [];
    });
  });
  protected readonly sentWords = computed(
    () => `${segmentWords(this.model.list()?.segmentsSent ?? 0)} sent`,
  );

  constructor() {
    let came = false;
    effect(() => {
      const callId = this.call();
      const thread = this.model.threads().find((one) => one.callId === callId);
      if (came || callId === undefined || !this.model.list()) return;
      came = true;
      if (thread) {
        untracked(() => {
          void this.openPhone(thread.phone);
          this.afterRender(() => this.list()?.show(thread.phone));
        });
      }
    });
    inject(Keys).register(this.keys(), inject(DestroyRef));
  }

  protected open(entry: ListEntry): void {
    void this.openPhone(entry.phone);
    this.afterRender(() =>
      this.thread()?.focus(entry.kind === 'need' ? entry.messageId : undefined),
    );
  }

  protected close(): void {
    void this.model.open(null);
    this.location.replaceState('/messages');
    this.afterRender(() => this.list()?.focus());
  }

  protected toBoard(callId: string): void {
    this.board.selectedCallId.set(callId);
    void this.router.navigate(['/board'], { queryParams: { call: callId } });
  }

  protected takeCall(message: MessageDto): void {
    void this.prefill.take({
      phone: message.phone,
      name: '',
      address: '',
      units: '',
      remark: `By text: ${message.body}`,
    });
  }

  private openPhone(phone: string): Promise<void> {
    const opening = this.model.open(phone);
    const callId = this.model.thread()?.callId;
    // The call and not the phone: an address is kept in histories and logs.
    this.location.replaceState('/messages', callId ? `call=${callId}` : '');
    return opening;
  }

  private afterRender(act: () => void): void {
    afterNextRender(act, { injector: this.injector });
  }

  private keys(): readonly KeyAction[] {
    const scope = 'Messages';
    const isOpen = (): boolean => this.model.openPhone() !== null;
    // The list takes these keys too, though it is a list of choices: only what is typed does not.
    const inList = (
      keys: string,
      does: string,
      run: () => void,
      when: () => boolean = () => true,
      repeats = false,
    ): KeyAction => ({
      keys,
      does,
      scope,
      run,
      repeats,
      inFields: true,
      when: () => !isTyping() && when(),
    });
    return [
      inList('j', 'Next text or thread', () => this.list()?.move(1), undefined, true),
      inList('k', 'The one before', () => this.list()?.move(-1), undefined, true),
      inList(
        'Enter',
        'Open it; at a text that needs a person, go to the decision',
        () => this.list()?.openCursor(),
        () => this.list()?.hasFocus() === true,
      ),
      inList(
        'r',
        'Reply',
        () => this.thread()?.focusReply(),
        () => isOpen() && this.model.whyNoReply() === null,
      ),
      inList(
        'b',
        'Open the call on the board',
        () => this.toBoard(this.callId()!),
        () => this.callId() !== null,
      ),
      inList(
        'u',
        'Take the new order',
        () => this.list()?.takeNewOrder(),
        () => this.list()?.hasHeld() === true,
      ),
      {
        keys: 'Escape',
        does: 'Back to the list; what was written is kept',
        scope,
        inFields: true,
        when: isOpen,
        run: () => this.close(),
      },
    ];
  }

  private callId(): string | null {
    return this.model.thread()?.callId ?? this.model.replyCallId();
  }
}

const isTyping = (): boolean =>
  document.activeElement instanceof HTMLTextAreaElement ||
  document.activeElement instanceof HTMLInputElement;
