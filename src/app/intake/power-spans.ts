import {
  ChangeDetectionStrategy,
  Component,
  computed,
  inject,
  input,
  output,
  signal,
} from '@angular/core';
import type { Instant } from '@shared/domain/instant';
import type { Span } from '@shared/domain/thaw/uncooled-time';
import { Clock } from '../core/clock';
import { Session } from '../core/session';
import { Zone } from '../core/zone';
import { readTimeEntry } from './time-entry';

/** The contract takes no more. */
const MOST_SPANS = 6;

/** When the power came back for a while and went again; not asked unless somebody says so. */
@Component({
  selector: 'thaw-power-spans',
  template: `
    @for (span of spans(); track span.from) {
      <p class="note">
        Back {{ zone.dayTime(span.from) }}, gone again {{ zone.dayTime(span.to) }}
        <button type="button" class="plain quiet" (click)="remove(span)">Remove</button>
      </p>
    }
    @if (isAsked()) {
      <div class="line">
        <label class="inline">
          Came back <input #from type="text" class="when" autocomplete="off" placeholder="22:30" />
        </label>
        <label class="inline">
          went again
          <input
            #to
            type="text"
            class="when"
            autocomplete="off"
            placeholder="2 h ago"
            (keydown.enter)="$event.preventDefault(); add(from, to)"
          />
        </label>
        <button type="button" class="plain" (click)="add(from, to)">Add</button>
        <button type="button" class="plain quiet" (click)="leave()">Close</button>
      </div>
      <p class="note error" role="alert">{{ error() }}</p>
    } @else if (mayAdd()) {
      <button type="button" class="plain quiet" (click)="isAsked.set(true)">
        It came back for a while in between
      </button>
    }
  `,
  styleUrls: ['./fields.scss', './power-spans.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PowerSpans {
  private readonly clock = inject(Clock);
  private readonly session = inject(Session);
  protected readonly zone = inject(Zone);

  readonly spans = input.required<readonly Span[]>();
  readonly outAt = input.required<Instant | null>();
  readonly backAt = input.required<Instant | null>();
  readonly changed = output<Span[]>();

  protected readonly isAsked = signal(false);
  protected readonly error = signal('');
  protected readonly mayAdd = computed(() => this.spans().length < MOST_SPANS);

  protected add(from: HTMLInputElement, to: HTMLInputElement): void {
    const span = { from: this.read(from.value), to: this.read(to.value) };
    const problem = spanProblem(span, this.spans(), this.outAt(), this.backAt());
    this.error.set(problem);
    if (problem !== '' || span.from === null || span.to === null) return;
    const added = { from: span.from, to: span.to };
    this.changed.emit([...this.spans(), added].sort((a, b) => a.from - b.from));
    this.leave();
  }

  protected remove(span: Span): void {
    this.changed.emit(this.spans().filter((one) => one !== span));
  }

  protected leave(): void {
    this.isAsked.set(false);
    this.error.set('');
  }

  private read(text: string): Instant | null {
    const entry = readTimeEntry(text, this.clock.exact(), this.session.zone());
    return entry.kind === 'moment' ? entry.at : null;
  }
}

/** What is wrong with a time that the power is said to have been back, in words; '' when nothing is. */
export function spanProblem(
  { from, to }: { readonly from: Instant | null; readonly to: Instant | null },
  others: readonly Span[],
  outAt: Instant | null,
  backAt: Instant | null,
): string {
  if (from === null || to === null) return 'Write both as 2 h ago, 22:30 or yesterday 22:30.';
  if (to <= from) return 'It went again before it came back.';
  if (outAt !== null && from <= outAt) return 'That is before the power first went.';
  if (backAt !== null && to > backAt) return 'That is after it came back for good.';
  const overlaps = others.some((other) => from < other.to && other.from < to);
  return overlaps ? 'That overlaps another time that it was back.' : '';
}
