import {
  ChangeDetectionStrategy,
  Component,
  computed,
  ElementRef,
  inject,
  input,
  linkedSignal,
  output,
} from '@angular/core';
import { STATE_WORDS } from '@shared/domain/call-state';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import type { RankedCall } from '../core/ranking';
import { Zone } from '../core/zone';
import { addressWords } from '../intake/address-words';
import { lanesByKind, stripFactsOf } from './cold-strip-scale';
import { stripWords } from './cold-strip-words';
import { LANE_WORDS, lossWords } from './queue-words';
import { whenWords } from './time-words';

const PAGE_ROWS = 25;

/**
 * The queue as a plain table in pages, everything in words: for people who listen, and for whoever
 * finds a page easier than a scrolling list. Nothing in it moves by itself.
 */
@Component({
  selector: 'thaw-queue-list',
  templateUrl: './queue-list.html',
  styleUrl: './queue-list.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class QueueList {
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef);

  readonly ids = input.required<readonly string[]>();
  readonly ranked = input.required<ReadonlyMap<string, RankedCall>>();
  readonly opened = output<string>();

  protected readonly pages = computed(() => Math.max(1, Math.ceil(this.ids().length / PAGE_ROWS)));
  protected readonly page = linkedSignal<number, number>({
    source: () => this.pages(),
    computation: (pages, previous) => Math.min(previous?.value ?? 0, pages - 1),
  });
  protected readonly first = computed(() => this.page() * PAGE_ROWS);

  protected readonly rows = computed(() =>
    this.ids()
      .slice(this.first(), this.first() + PAGE_ROWS)
      .flatMap((id) => {
        const call = this.board.calls().get(id);
        return call ? [this.rowOf(call, this.ranked().get(id))] : [];
      }),
  );

  focus(): void {
    this.element.nativeElement.querySelector<HTMLElement>('.scroll')?.focus();
  }

  protected turn(to: number): void {
    this.page.set(Math.min(Math.max(to, 0), this.pages() - 1));
    this.element.nativeElement.querySelector('table')?.focus();
  }

  private rowOf(call: RankedCall['call'], ranked: RankedCall | undefined) {
    const now = this.clock.now();
    const clock = (at: number): string => whenWords(at, now, this.zone.name());
    const loss = ranked ? lossWords(ranked.urgency) : '';
    return {
      id: call.id,
      number: call.number,
      who: call.name,
      place: addressWords(call.address),
      state: STATE_WORDS[call.state],
      urgency: ranked
        ? `${LANE_WORDS[ranked.urgency.lane]}${loss === '' ? '' : `, ${loss} a minute`}`
        : 'No longer in the queue',
      strip: stripWords(lanesByKind(stripFactsOf(call), now), now, clock),
      marks: [
        call.danger ? 'Danger.' : '',
        call.unreadTexts > 0 ? `${call.unreadTexts} unread.` : '',
        call.claim && call.claim.until > now
          ? `${call.claim.name} has it until ${clock(call.claim.until)}.`
          : '',
      ]
        .filter(Boolean)
        .join(' '),
    };
  }
}
