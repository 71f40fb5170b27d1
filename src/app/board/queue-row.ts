import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import type { CallRow } from '@shared/contract/calls';
import { STATE_WORDS } from '@shared/domain/call-state';
import type { Instant } from '@shared/domain/instant';
import type { Urgency } from '@shared/domain/urgency';
import { Zone } from '../core/zone';
import { shortPlaceDoubt } from '../intake/address-words';
import { ColdStrip } from './cold-strip';
import { stripFactsOf } from './cold-strip-scale';
import { isSettledRow, LANE_WORDS, lossWords } from './queue-words';
import { fromNowWords, whenWords } from './time-words';

/** The cells of one call in the queue. The row element itself is the queue's. */
@Component({
  selector: 'thaw-queue-row',
  imports: [ColdStrip],
  templateUrl: './queue-row.html',
  styleUrl: './queue-row.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { role: 'presentation', '[class.settled]': 'isSettled()' },
})
export class QueueRow {
  private readonly zone = inject(Zone);

  readonly call = input.required<CallRow>();
  /** `null` once the call has left the list and only keeps its place under the reader's eye. */
  readonly urgency = input.required<Urgency | null>();
  readonly rank = input.required<number>();
  readonly now = input.required<Instant>();
  readonly myUserId = input.required<string | null>();

  protected readonly strip = computed(() => stripFactsOf(this.call()));
  protected readonly state = computed(() => STATE_WORDS[this.call().state]);
  protected readonly isSettled = computed(() => isSettledRow(this.call()));
  protected readonly lane = computed(() => {
    const urgency = this.urgency();
    return urgency ? LANE_WORDS[urgency.lane] : '';
  });
  protected readonly loss = computed(() => {
    const urgency = this.urgency();
    return urgency ? lossWords(urgency) : '';
  });
  protected readonly reasons = computed(() => this.urgency()?.reasons ?? []);

  /** The street above; below it how well it is known, if not to the house, the name and the town. */
  protected readonly place = computed(() => {
    const { address, name } = this.call();
    const [street = '', ...rest] = address.text.split(', ');
    return {
      street: address.unitNo ? `${street}, ${address.unitNo}` : street,
      doubt: shortPlaceDoubt(address.kind),
      rest: [name, ...rest].join(', '),
    };
  });

  protected readonly saveBy = computed(() => {
    const at = this.urgency()?.saveByAt ?? null;
    if (at === null) return null;
    const now = this.now();
    return { clock: whenWords(at, now, this.zone.name()), words: fromNowWords(at, now) };
  });

  /** Who is on it, or when the technician comes; in short where a mark stands beside it. */
  protected readonly claim = computed(() => {
    const { claim, etaAt, danger, cutOff, unreadTexts } = this.call();
    const now = this.now();
    const isCrowded = danger || cutOff || unreadTexts > 0;
    if (claim && claim.until > now) {
      const isMine = claim.userId === this.myUserId();
      const until = `until ${whenWords(claim.until, now, this.zone.name())}`;
      const long = isMine ? `Yours ${until}` : `${firstName(claim.name)} has it ${until}`;
      const short = isMine ? 'Yours' : firstName(claim.name);
      return { long, short: isCrowded ? short : long };
    }
    if (etaAt === null) return { long: '', short: '' };
    const at = whenWords(etaAt, now, this.zone.name());
    return { long: `Arrives ${at}`, short: isCrowded ? at : `Arrives ${at}` };
  });
}

/** A row has no room for more, and the open call tells the whole name. */
const firstName = (name: string): string => name.split(' ')[0] ?? name;
