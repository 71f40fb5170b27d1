import {
  afterNextRender,
  afterRenderEffect,
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  Injector,
  output,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { MessageDto } from '@shared/contract/messages';
import { STATE_WORDS } from '@shared/domain/call-state';
import { formatPhone } from '@shared/domain/phone-number';
import { whenWords } from '../board/time-words';
import { Announce } from '../core/announce';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';
import { SetbackBox } from '../ui/setback-box';
import {
  type Decision,
  decisionsOn,
  milestoneWords,
  segmentWords,
  TEXT_STATES,
  whyWords,
} from './message-words';
import { MessagesModel } from './messages-model';
import { ReplyBox } from './reply-box';
import { isUnread } from './text-threads';

/** Near enough to the end to be carried along when a text arrives. */
const NEAR_END_PX = 80;

/** All texts with one phone, oldest first, what a person has to decide about, and a reply. */
@Component({
  selector: 'thaw-thread-view',
  imports: [MatIcon, ReplyBox, SetbackBox],
  templateUrl: './thread-view.html',
  styleUrls: ['../intake/fields.scss', './thread-view.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '(pointerdown)': 'seen()', '(keydown)': 'seen()' },
})
export class ThreadView {
  protected readonly model = inject(MessagesModel);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);
  private readonly announce = inject(Announce);
  private readonly injector = inject(Injector);

  readonly closed = output();
  /** The call is wanted on the board. */
  readonly callWanted = output<string>();
  /** A call is to be taken from what the customer wrote. */
  readonly callTaken = output<MessageDto>();

  private readonly scroll = viewChild<ElementRef<HTMLElement>>('scroll');
  private readonly title = viewChild<ElementRef<HTMLElement>>('title');
  private readonly reply = viewChild(ReplyBox);
  private shownPhone: string | null = null;

  protected readonly call = computed(() => this.model.thread()?.call ?? null);
  protected readonly callId = computed(() => this.call()?.id ?? this.model.replyCallId());
  protected readonly who = computed(
    () => this.call()?.name ?? this.model.household()?.name ?? this.phoneWords(),
  );
  protected readonly phoneWords = computed(() => formatPhone(this.model.openPhone() ?? ''));
  protected readonly callWords = computed(() => {
    const call = this.call();
    return call ? `Call ${call.number}, ${STATE_WORDS[call.state]}` : '';
  });

  protected readonly lines = computed(() => {
    const waiting = this.model.needsPerson();
    const now = this.clock.now();
    return this.model.messages().map((message) => ({
      message,
      state: TEXT_STATES[message.state],
      when: whenWords(message.at, now, this.zone.name()),
      milestone: milestoneWords(message),
      segments: message.direction === 'out' ? segmentWords(message.segments) : '',
      isNew: isUnread(message),
      // What once held a text up is of no interest when it has arrived.
      note: message.state === 'delivered' ? '' : (message.trouble ?? ''),
      why: waiting.has(message.id) ? whyWords(message) : '',
      decisions: waiting.has(message.id) ? decisionsOn(message) : [],
    }));
  });
  protected readonly totals = computed(() => {
    const texts = this.model.messages();
    const out = texts.filter(({ direction }) => direction === 'out');
    const segments = out
      .filter(({ state }) => state === 'sent' || state === 'delivered' || state === 'undelivered')
      .reduce((sum, message) => sum + message.segments, 0);
    return `${out.length} from us, ${texts.length - out.length} from them, ${segmentWords(segments)} sent`;
  });

  constructor() {
    afterRenderEffect(() => {
      const phone = this.model.openPhone();
      this.lines();
      const box = this.scroll()?.nativeElement;
      if (!box) return;
      const isOther = phone !== this.shownPhone;
      const fromEnd = box.scrollHeight - box.scrollTop - box.clientHeight;
      // A text of a screen's height may just have been added below what was the end.
      const added = (box.lastElementChild?.lastElementChild?.clientHeight ?? 0) + NEAR_END_PX;
      if (isOther || fromEnd <= added) box.scrollTop = box.scrollHeight;
      if (!this.model.isOpening()) this.shownPhone = phone;
    });
  }

  /** Puts the cursor at the head of the thread, or at the decision about this text. */
  focus(messageId?: string): void {
    const button =
      messageId === undefined
        ? null
        : this.scroll()?.nativeElement.querySelector<HTMLElement>(
            `[data-text="${messageId}"] button`,
          );
    if (button) {
      button.focus();
      button.closest('li')?.scrollIntoView({ block: 'nearest' });
    } else this.title()?.nativeElement.focus();
  }

  focusReply(): void {
    this.reply()?.focus();
  }

  protected async decide(message: MessageDto, decision: Decision): Promise<void> {
    if (this.model.isBusy() || !(await this.model.resolve(message, decision))) return;
    this.announce.say(DONE_WORDS[decision]);
    afterNextRender(() => this.focus(), { injector: this.injector });
  }

  /** Somebody is at the thread: what has arrived since counts as read. */
  protected seen(): void {
    if (this.lines().some(({ isNew }) => isNew) && !this.model.isBusy()) void this.model.markRead();
  }
}

const DONE_WORDS: Readonly<Record<Decision, string>> = {
  'send-again': 'It goes out again as a new text.',
  'was-sent': 'Noted as sent.',
  'give-up': 'Closed.',
};
