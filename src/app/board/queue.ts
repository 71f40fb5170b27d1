import { BreakpointObserver } from '@angular/cdk/layout';
import { CdkVirtualScrollViewport, ScrollingModule } from '@angular/cdk/scrolling';
import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  inject,
  Injector,
  linkedSignal,
  output,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { map } from 'rxjs';
import { Announce } from '../core/announce';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Keys } from '../core/keys';
import { Session } from '../core/session';
import { ColdRuler } from './cold-ruler';
import { EMPTY_ORDER, heldWords, type HeldOrder, nextOrder, takeOrder } from './held-order';
import { QueueFilters } from './queue-filters';
import { QueueList } from './queue-list';
import { QueueRow } from './queue-row';

/** Heights of a row, in CSS pixels; the virtual scrolling needs one height for all. */
const ROW_PX = 52;
const TALL_ROW_PX = 128;
const NARROW = '(width < 640px)';
/** Rows kept ready above and below the ones in sight; bounds what is drawn at once. */
const BUFFER_ROWS = 8;

interface OrderSource {
  readonly live: readonly string[];
  readonly held: boolean;
  /** Counts what takes the live order at once: a key, a new filter. */
  readonly taken: number;
}

/**
 * The queue of calls by urgency. Thousands of rows, of which only those in sight are drawn. While
 * somebody reads or works in the rows their order is held and one line says what waits.
 */
@Component({
  selector: 'thaw-queue',
  imports: [ColdRuler, QueueFilters, QueueList, QueueRow, ScrollingModule],
  templateUrl: './queue.html',
  styleUrl: './queue.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Queue {
  protected readonly board = inject(BoardStore);
  protected readonly clock = inject(Clock);
  protected readonly session = inject(Session);
  private readonly announce = inject(Announce);
  private readonly injector = inject(Injector);

  /** Enter or a click: open this call. */
  readonly opened = output<string>();

  private readonly isNarrow = toSignal(
    inject(BreakpointObserver)
      .observe(NARROW)
      .pipe(map(({ matches }) => matches)),
    { initialValue: false },
  );
  protected readonly rowPx = computed(() => (this.isNarrow() ? TALL_ROW_PX : ROW_PX));
  protected readonly bufferRows = BUFFER_ROWS;

  private readonly viewport = viewChild(CdkVirtualScrollViewport);
  private readonly list = viewChild(QueueList);
  protected readonly filters = viewChild.required(QueueFilters);

  private readonly hasPointer = signal(false);
  protected readonly hasFocus = signal(false);
  /** The paged table instead of the scrolling rows. */
  protected readonly isList = signal(false);
  private readonly taken = signal(0);

  protected readonly byId = computed(
    () =>
      new Map(this.board.ranked().map((ranked, i) => [ranked.call.id, { ...ranked, rank: i + 1 }])),
  );

  private readonly order = linkedSignal<OrderSource, HeldOrder>({
    source: () => {
      // A new filter asks for other rows, so it takes the live order at once.
      this.board.filter();
      return {
        live: this.board.shown().map(({ call }) => call.id),
        held: this.hasPointer() || this.hasFocus(),
        taken: this.taken(),
      };
    },
    computation: ({ live, held, taken }, previous) => {
      if (!previous || previous.source.taken !== taken) return takeOrder(live);
      return nextOrder(previous.value ?? EMPTY_ORDER, live, held);
    },
  });

  /** Rows whose call the board no longer knows at all have nothing to show. */
  protected readonly ids = computed(() => {
    const calls = this.board.calls();
    return this.order().ids.filter((id) => calls.has(id));
  });
  protected readonly waitingWords = computed(() => heldWords(this.order()));

  protected readonly activeRow = computed(() => {
    const selected = this.board.selectedCallId();
    return selected !== null && this.ids().includes(selected) ? `queue-row-${selected}` : null;
  });

  constructor() {
    // A new filter takes the live order, whoever reads.
    effect(() => {
      this.board.filter();
      untracked(() => this.taken.update((count) => count + 1));
    });
    // What is selected elsewhere is brought into sight; no row moves for it.
    effect(() => {
      const selected = this.board.selectedCallId();
      if (selected !== null) untracked(() => this.bringIntoSight(selected));
    });
    this.registerKeys();
  }

  /** Goes to the rows or to the list, whichever is shown; at once, unless a key came before it is drawn. */
  focus(): void {
    if (this.isList() ? this.list() : this.viewport()) this.focusShown();
    else afterNextRender(() => this.focusShown(), { injector: this.injector });
  }

  private focusShown(): void {
    if (this.isList()) this.list()?.focus();
    else this.viewport()?.elementRef.nativeElement.focus();
  }

  protected readonly trackId = (_: number, id: string): string => id;

  protected select(id: string): void {
    this.board.selectedCallId.set(id);
  }

  protected takeNewOrder(): void {
    this.taken.update((count) => count + 1);
    const selected = this.board.selectedCallId();
    if (selected !== null) {
      afterNextRender(() => this.bringIntoSight(selected), { injector: this.injector });
    }
    this.announce.say('The new order is taken.');
  }

  protected pointerIs(where: 'in' | 'out'): void {
    this.hasPointer.set(where === 'in');
    if (where === 'out') this.board.hoveredCallId.set(null);
  }

  protected focusIs(where: 'in' | 'out'): void {
    this.hasFocus.set(where === 'in');
    // Arriving with the Tab key lands on a row, not on nothing.
    if (where === 'in' && this.activeRow() === null) {
      const first = this.ids()[this.firstInSight()];
      if (first !== undefined && this.board.selectedCallId() === null) this.select(first);
    }
  }

  protected hover(event: Event): void {
    this.board.hoveredCallId.set(callAt(event));
  }

  /** A click opens the row that it falls on; the keyboard's way is Enter. */
  protected pick(event: Event): void {
    const id = callAt(event);
    if (id === null) return;
    this.select(id);
    this.opened.emit(id);
  }

  protected press(event: KeyboardEvent): void {
    if (event.ctrlKey || event.altKey || event.metaKey) return;
    const page = Math.max(
      1,
      Math.floor((this.viewport()?.getViewportSize() ?? 0) / this.rowPx()) - 1,
    );
    const steps: Readonly<Record<string, number>> = {
      ArrowDown: 1,
      ArrowUp: -1,
      PageDown: page,
      PageUp: -page,
      Home: -Infinity,
      End: Infinity,
    };
    const step = steps[event.key];
    if (step !== undefined) {
      event.preventDefault();
      this.move(step);
    } else if (event.key === 'Enter') {
      event.preventDefault();
      const selected = this.board.selectedCallId();
      if (selected !== null) this.opened.emit(selected);
    }
  }

  private move(step: number): void {
    const ids = this.ids();
    if (ids.length === 0) return;
    const at = ids.indexOf(this.board.selectedCallId() ?? '');
    const from = at < 0 ? this.firstInSight() - Math.sign(step) : at;
    const next = ids[Math.min(Math.max(from + step, 0), ids.length - 1)];
    if (next !== undefined) this.select(next);
  }

  private firstInSight(): number {
    const top = this.viewport()?.measureScrollOffset('top') ?? 0;
    return Math.min(Math.ceil(top / this.rowPx()), Math.max(this.ids().length - 1, 0));
  }

  private bringIntoSight(id: string): void {
    const viewport = this.viewport();
    const index = this.ids().indexOf(id);
    if (!viewport || index < 0) return;
    // The viewport remembers its height, and what stands above it may have grown since.
    viewport.checkViewportSize();
    const top = viewport.measureScrollOffset('top');
    const height = viewport.getViewportSize();
    if (index * this.rowPx() < top) viewport.scrollToOffset(index * this.rowPx());
    else if ((index + 1) * this.rowPx() > top + height) {
      viewport.scrollToOffset((index + 1) * this.rowPx() - height);
    }
  }

  private registerKeys(): void {
    const scope = 'Queue';
    inject(Keys).register(
      [
        { keys: '/', does: 'Search the queue', scope, run: () => this.filters().focusSearch() },
        { keys: 'j', does: 'Next call', scope, repeats: true, run: () => this.move(1) },
        { keys: 'k', does: 'Call before', scope, repeats: true, run: () => this.move(-1) },
        {
          keys: 'Enter',
          does: 'Open the selected call',
          scope,
          // Enter on a button is the button's.
          when: () => isOnPage() && this.board.selectedCallId() !== null,
          run: () => {
            const selected = this.board.selectedCallId();
            if (selected !== null) this.opened.emit(selected);
          },
        },
        { keys: 'u', does: 'Take the new order', scope, run: () => this.takeNewOrder() },
        {
          keys: 'w',
          does: 'The queue as a list in words, or as rows',
          scope,
          run: () => this.isList.update((isList) => !isList),
        },
        { keys: 'q', does: 'Go to the queue', scope, run: () => this.focus() },
      ],
      inject(DestroyRef),
    );
  }
}

/** The call whose row an event fell on. One listener serves all rows. */
const callAt = (event: Event): string | null =>
  (event.target as Element).closest<HTMLElement>('[data-call]')?.dataset['call'] ?? null;

/** Whether nothing in particular has the focus. */
const isOnPage = (): boolean =>
  document.activeElement === null ||
  document.activeElement === document.body ||
  document.activeElement.tagName === 'MAIN';
