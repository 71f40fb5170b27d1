import { ChangeDetectionStrategy, Component, computed, inject, signal } from '@angular/core';
import type { MessageDto } from '@shared/contract/messages';
import { textLength } from '@shared/domain/texts/segments';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';
import { CallModel } from './call-model';
import { whenWords } from './time-words';

const STATE_WORDS: Readonly<Record<MessageDto['state'], string>> = {
  new: 'waiting to go out',
  sending: 'being sent',
  sent: 'sent',
  delivered: 'delivered',
  undelivered: 'not delivered',
  failed: 'failed',
  unknown: 'sent or not: nobody knows; see Messages',
  suppressed: 'held back',
  received: 'received',
};

/** All texts with the household, oldest first, and a reply. */
@Component({
  selector: 'thaw-call-thread',
  templateUrl: './call-thread.html',
  styleUrls: ['../intake/fields.scss', './call-thread.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class CallThread {
  protected readonly call = inject(CallModel);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);

  protected readonly text = signal('');
  protected readonly messages = computed(() =>
    [...(this.call.detail()?.messages ?? [])].sort((a, b) => a.at - b.at),
  );
  protected readonly segments = computed(() => {
    const text = this.text().trim();
    return text === '' ? 0 : textLength(text).segments;
  });
  protected readonly unread = computed(() => this.call.row()?.unreadTexts ?? 0);
  protected readonly mayText = computed(() => this.call.detail()?.mayText ?? false);

  protected about(message: MessageDto): string {
    const when = whenWords(message.at, this.clock.now(), this.zone.name());
    if (message.direction === 'in') return `Customer, ${when}`;
    const trouble = message.trouble === null ? '' : `: ${message.trouble}`;
    return `We, ${when}, ${STATE_WORDS[message.state]}${trouble}`;
  }

  protected async send(): Promise<void> {
    const text = this.text().trim();
    if (text !== '' && (await this.call.send(text))) this.text.set('');
  }
}
