import {
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  inject,
  input,
  signal,
  untracked,
} from '@angular/core';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import { timerWords } from '../board/check-draft';
import { Announce } from '../core/announce';
import { Clock } from '../core/clock';
import { Drafts } from '../core/drafts';
import { formDraftKey } from './day-orders';

/** How long after the plug is out nobody reaches inside: as the caution `stored-charge` says. */
const WAIT_MS = 5 * MINUTE_MS;
/** Long enough to be felt through a glove, in milliseconds on and off. */
const OVER_BUZZ = [300, 150, 300];

/** The wait between pulling the plug and reaching inside, as a timer that outlives a locked phone. */
@Component({
  selector: 'thaw-wait-gate',
  template: `
    @if (startedAt() === null) {
      <button type="button" (click)="start()">It is unplugged: start 5 minutes</button>
    } @else {
      <p class="left" role="timer">{{ words() }}</p>
      <p>
        @if (isOver()) {
          <strong>Five minutes are over.</strong> Measure that no charge is left before you touch.
        } @else {
          Hands off until then: capacitors hold a charge.
        }
      </p>
      <button type="button" (click)="start()">Plugged in since? Start again</button>
    }
  `,
  styles: `
    :host {
      display: grid;
      gap: 4px;
      margin-block-start: 8px;
    }
    .left {
      font-size: var(--thaw-text-xxl);
      font-weight: 600;
      line-height: 1.1;
      font-variant-numeric: tabular-nums;
    }
    button {
      min-block-size: 52px;
      padding: 4px 14px;
      border: 1.5px solid var(--thaw-accent);
      border-radius: var(--thaw-radius);
      background: var(--thaw-raised);
      color: var(--thaw-accent);
      font-weight: 600;
      cursor: pointer;
      touch-action: manipulation;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class WaitGate {
  private readonly clock = inject(Clock);
  private readonly drafts = inject(Drafts);
  private readonly announce = inject(Announce);

  readonly stopId = input.required<string>();

  protected readonly startedAt = signal<Instant | null>(null);
  private readonly second = signal(this.clock.exact());
  private readonly leftMs = computed(() => {
    const startedAt = this.startedAt();
    return startedAt === null ? WAIT_MS : startedAt + WAIT_MS - this.second();
  });
  protected readonly isOver = computed(() => this.leftMs() <= 0);
  protected readonly words = computed(() => timerWords(this.leftMs()));

  constructor() {
    effect(() => {
      const kept = this.drafts.load(formDraftKey('wait', this.stopId()), isMoment);
      untracked(() => this.startedAt.set(kept));
    });
    const ticking = setInterval(() => this.tick(), 1000);
    inject(DestroyRef).onDestroy(() => clearInterval(ticking));
  }

  protected start(): void {
    const now = this.clock.exact();
    this.second.set(now);
    this.startedAt.set(now);
    this.drafts.save(formDraftKey('wait', this.stopId()), now);
    this.announce.say('The timer runs: five minutes.');
  }

  private tick(): void {
    if (this.startedAt() === null || this.isOver()) return;
    this.second.set(this.clock.exact());
    if (!this.isOver()) return;
    navigator.vibrate?.(OVER_BUZZ);
    this.announce.say('Five minutes are over. Measure before you touch.');
  }
}

const isMoment = (value: unknown): value is Instant => typeof value === 'number';
