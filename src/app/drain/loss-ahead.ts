import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import type { CallRow } from '@shared/contract/calls';
import { addHours, type Instant } from '@shared/domain/instant';
import { stripFactsOf } from '../board/cold-strip-scale';
import { ColdStripSummary } from '../board/cold-strip-summary';
import { useRulerBackground } from '../board/ruler-background';
import { whenWords } from '../board/time-words';
import { money, Zone } from '../core/zone';
import { lossFront, lostWithin } from './loss-front';
import { moneyShort } from './money-short';

/** Below this share of the highest bar there is nothing to read off it. */
const LABEL_FROM = 0.12;

/**
 * All cold strips of the storm summed up: on the queue's own ruler of hours, what is lost in each if
 * nothing is done, in money and by kind of compartment.
 */
@Component({
  selector: 'thaw-loss-ahead',
  imports: [ColdStripSummary],
  templateUrl: './loss-ahead.html',
  styleUrl: './loss-ahead.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class LossAhead {
  private readonly zone = inject(Zone);

  readonly calls = input.required<readonly CallRow[]>();
  readonly now = input.required<Instant>();

  protected readonly counted = computed(() =>
    this.calls().filter(({ state }) => state !== 'duplicate'),
  );
  protected readonly strips = computed(() => this.counted().map(stripFactsOf));
  protected readonly front = computed(() => lossFront(this.counted(), this.now()));
  protected readonly lost = computed(() => moneyShort(this.front().lostCents));
  protected readonly later = computed(() => moneyShort(this.front().laterCents));

  protected readonly bars = computed(() => {
    const { bars } = this.front();
    const most = Math.max(1, ...bars.map((bar) => bar.centsPerHour));
    return bars.map((bar) => {
      const height = bar.centsPerHour / most;
      return {
        ...bar,
        height,
        label: height >= LABEL_FROM ? moneyShort(bar.centsPerHour).replace('$', '') : '',
      };
    });
  });

  /** The picture in a sentence, which everybody may read. */
  protected readonly words = computed(() => {
    const front = this.front();
    const at = (hours: number): string =>
      whenWords(addHours(this.now(), hours), this.now(), this.zone.name());
    const ahead = front.bars.reduce((sum, bar) => sum + bar.cents, 0);
    if (ahead === 0) return 'Nothing comes to its save-by in the next 48 hours.';
    const worst = front.bars.reduce((a, b) => (b.centsPerHour > a.centsPerHour ? b : a));
    return (
      `If nothing is done, ${money(lostWithin(front, 1))} is lost within the next hour, ` +
      `${money(lostWithin(front, 4))} within 4 hours and ${money(lostWithin(front, 12))} within 12. ` +
      `It is lost fastest from ${at(worst.fromHours)} to ${at(worst.toHours)}: ` +
      `${money(worst.centsPerHour)} an hour.`
    );
  });

  constructor() {
    useRulerBackground();
  }
}
