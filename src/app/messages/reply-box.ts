import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  type ElementRef,
  inject,
  input,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import { Announce } from '../core/announce';
import { Drafts } from '../core/drafts';
import { MessagesModel } from './messages-model';
import { dearWords, lengthWords, MOST_CHARACTERS, textCost } from './text-cost';

const isText = (value: unknown): value is string => typeof value === 'string';

/** Writes a text to the open household; what is not sent is kept, also over a reload. */
@Component({
  selector: 'thaw-reply-box',
  imports: [MatIcon],
  template: `
    <form (submit)="$event.preventDefault(); send()">
      <label for="reply-text">Reply</label>
      <textarea
        #box
        id="reply-text"
        rows="3"
        aria-describedby="reply-length"
        [attr.maxlength]="most"
        [value]="text()"
        (input)="type(box.value)"
        (keydown.control.enter)="$event.preventDefault(); send()"
        (keydown.meta.enter)="$event.preventDefault(); send()"
      ></textarea>
      <div class="foot">
        <p class="length" id="reply-length">
          {{ length() }}
          @if (room() <= 60) {
            <span>{{ room() }} left</span>
          }
        </p>
        <button type="submit" class="plain main" [disabled]="!maySend()">
          Send text <kbd>Ctrl Enter</kbd>
        </button>
      </div>
      <p class="dear" role="status">
        @if (dear() !== '') {
          <mat-icon svgIcon="info" aria-hidden="true" /> {{ dear() }}
        }
      </p>
    </form>
  `,
  styleUrls: ['../intake/fields.scss', './reply-box.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ReplyBox {
  private readonly model = inject(MessagesModel);
  private readonly drafts = inject(Drafts);
  private readonly announce = inject(Announce);

  readonly phone = input.required<string>();

  private readonly box = viewChild.required<ElementRef<HTMLTextAreaElement>>('box');
  protected readonly most = MOST_CHARACTERS;
  protected readonly text = signal('');
  private readonly isSending = signal(false);
  /** What stood in the box when Enter was pressed last: it goes after the text that is on its way. */
  private next: string | null = null;

  private readonly cost = computed(() => textCost(this.text()));
  protected readonly length = computed(() => lengthWords(this.cost()));
  protected readonly dear = computed(() => dearWords(this.cost()));
  protected readonly room = computed(() => MOST_CHARACTERS - this.text().length);
  protected readonly maySend = computed(
    () => this.cost().characters > 0 && this.model.replyCallId() !== null,
  );

  constructor() {
    effect(() => {
      const kept = this.drafts.load(keyOf(this.phone()), isText) ?? '';
      untracked(() => this.text.set(kept));
    });
  }

  focus(): void {
    this.box().nativeElement.focus();
  }

  protected type(text: string): void {
    this.text.set(text);
    if (text.trim() === '') this.drafts.clear(keyOf(this.phone()));
    else this.drafts.save(keyOf(this.phone()), text);
  }

  protected async send(): Promise<void> {
    if (!this.maySend()) return;
    const phone = this.phone();
    this.next = this.text();
    if (this.isSending()) return;
    this.isSending.set(true);
    try {
      let sent: string | null = null;
      // The same words again are the same press of a key.
      while (this.next !== null && this.next !== sent && this.phone() === phone) {
        sent = this.next;
        this.next = null;
        if (!(await this.sendNow(phone, sent))) return;
      }
    } finally {
      this.next = null;
      this.isSending.set(false);
    }
  }

  private async sendNow(phone: string, written: string): Promise<boolean> {
    if (!(await this.model.send(written.trim()))) return false;
    if (this.phone() !== phone || this.text() === written) this.drafts.clear(keyOf(phone));
    if (this.phone() === phone && this.text() === written) this.text.set('');
    this.announce.say('The text is on its way out.');
    return true;
  }
}

const keyOf = (phone: string): string => `text:${phone}`;
