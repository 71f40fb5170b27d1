import { CdkVirtualScrollViewport, ScrollingModule } from '@angular/cdk/scrolling';
import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  ElementRef,
  inject,
  input,
  output,
  untracked,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { CallRow } from '@shared/contract/calls';
import type { Instant } from '@shared/domain/instant';
import { nextSaveBy, stripFactsOf } from '../board/cold-strip-scale';
import { ColdStrip } from '../board/cold-strip';
import { whenWords } from '../board/time-words';
import { Zone } from '../core/zone';
import { addressWords } from '../intake/address-words';
import type { WhyUnplanned } from './why-unplanned';

export interface UnplannedCall {
  readonly call: CallRow;
  readonly why: WhyUnplanned;
}

/** Three lines of text and a strip as high as in the queue. */
const ROW_PX = 98;

/** Waiting calls that are on no route, most urgent first, each with the reason in words. */
@Component({
  selector: 'thaw-unplanned-list',
  imports: [ColdStrip, MatIcon, ScrollingModule],
  template: `
    <h2 id="unplanned-title">
      On no route <span class="count">{{ calls().length }}</span>
    </h2>
    @if (calls().length === 0) {
      <p class="empty">{{ emptyWords() }}</p>
    } @else {
      <cdk-virtual-scroll-viewport
        [itemSize]="rowPx"
        role="grid"
        tabindex="0"
        aria-labelledby="unplanned-title"
        aria-describedby="unplanned-keys"
        aria-colcount="1"
        [attr.aria-rowcount]="calls().length"
        [attr.aria-activedescendant]="activeId()"
        (keydown)="press($event)"
        (focus)="arrive()"
      >
        <div
          *cdkVirtualFor="let one of calls(); trackBy: trackId; let i = index"
          role="row"
          [id]="'unplanned-' + one.call.id"
          [attr.aria-rowindex]="i + 1"
          [attr.aria-selected]="one.call.id === selected()"
        >
          <div
            role="gridcell"
            class="one"
            tabindex="-1"
            [class.chosen]="one.call.id === selected()"
            (click)="chosen.emit(one.call.id)"
            (keydown.enter)="added.emit(one.call)"
            (dblclick)="added.emit(one.call)"
          >
            <span class="top">
              <strong>{{ one.call.number }}</strong>
              <span class="where">{{ one.call.name }}, {{ addressWords(one.call.address) }}</span>
              <span class="save-by">{{ saveByWords(one.call) }}</span>
            </span>
            <thaw-cold-strip [facts]="facts(one.call)" [now]="now()" />
            <span class="why" [class.blocked]="one.why.reason !== 'not-proposed'">
              @if (one.why.reason !== 'not-proposed') {
                <mat-icon svgIcon="info" aria-hidden="true" />
              }
              {{ one.why.words }}
            </span>
          </div>
        </div>
      </cdk-virtual-scroll-viewport>
      @if (chosenWhy(); as one) {
        <div class="whole" role="status">
          <p>
            <strong>Call {{ one.call.number }}.</strong> {{ one.why.words }}
          </p>
          @if (one.why.help; as help) {
            <p class="soft">What would change it, tried on this plan:</p>
            <ul>
              @for (words of help; track words) {
                <li>{{ words }}</li>
              }
            </ul>
          }
        </div>
      }
      <p class="keys" id="unplanned-keys">
        <kbd>A</kbd> or Enter puts the chosen call on a route by hand
      </p>
    }
  `,
  styleUrl: './unplanned-list.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class UnplannedList {
  private readonly zone = inject(Zone);

  readonly calls = input.required<readonly UnplannedCall[]>();
  readonly selected = input.required<string | null>();
  readonly now = input.required<Instant>();
  /** What an empty list means. */
  readonly emptyWords = input.required<string>();

  readonly chosen = output<string>();
  readonly added = output<CallRow>();

  protected readonly rowPx = ROW_PX;
  protected readonly addressWords = addressWords;
  private readonly viewport = viewChild(CdkVirtualScrollViewport);
  private readonly element = viewChild<CdkVirtualScrollViewport, ElementRef<HTMLElement>>(
    CdkVirtualScrollViewport,
    { read: ElementRef },
  );

  private readonly at = computed(() =>
    this.calls().findIndex(({ call }) => call.id === this.selected()),
  );
  /** What a proposal found out, in full: in its row there is room for one line. */
  protected readonly chosenWhy = computed(() => {
    const one = this.calls()[this.at()];
    return one && one.why.reason !== 'not-proposed' ? one : null;
  });
  protected readonly activeId = computed(() =>
    this.at() < 0 ? null : `unplanned-${this.selected()}`,
  );

  constructor() {
    effect(() => {
      const at = this.at();
      if (at >= 0) untracked(() => this.bringIntoSight(at));
    });
  }

  focus(): void {
    this.element()?.nativeElement.focus();
  }

  /** The list got another height: measures it again and shows the chosen call. */
  keepInSight(): void {
    this.viewport()?.checkViewportSize();
    if (this.at() >= 0) this.bringIntoSight(this.at());
  }

  protected readonly trackId = (_: number, one: UnplannedCall): string => one.call.id;
  protected readonly facts = stripFactsOf;

  protected saveByWords(call: CallRow): string {
    const at = nextSaveBy(stripFactsOf(call), this.now());
    return at === null ? 'none left' : `save by ${whenWords(at, this.now(), this.zone.name())}`;
  }

  protected arrive(): void {
    const [first] = this.calls();
    if (this.at() < 0 && first) this.chosen.emit(first.call.id);
  }

  protected press(event: KeyboardEvent): void {
    if (event.ctrlKey || event.altKey || event.metaKey) return;
    const steps: Readonly<Record<string, number>> = {
      ArrowDown: 1,
      ArrowUp: -1,
      PageDown: 6,
      PageUp: -6,
      Home: -Infinity,
      End: Infinity,
    };
    const step = steps[event.key];
    if (step !== undefined) {
      event.preventDefault();
      const to = Math.min(Math.max(this.at() + step, 0), this.calls().length - 1);
      const next = this.calls()[to];
      if (next) this.chosen.emit(next.call.id);
    } else if (event.key === 'Enter') {
      event.preventDefault();
      event.stopPropagation();
      const one = this.calls()[this.at()];
      if (one) this.added.emit(one.call);
    }
  }

  private bringIntoSight(index: number): void {
    const viewport = this.viewport();
    if (!viewport) return;
    const top = viewport.measureScrollOffset('top');
    const height = viewport.getViewportSize();
    if (index * ROW_PX < top) viewport.scrollToOffset(index * ROW_PX);
    else if ((index + 1) * ROW_PX > top + height) {
      viewport.scrollToOffset((index + 1) * ROW_PX - height);
    }
  }
}
