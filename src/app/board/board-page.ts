import { Location } from '@angular/common';
import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  type ElementRef,
  inject,
  Injector,
  input,
  linkedSignal,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { Router } from '@angular/router';
import { BoardStore } from '../core/board-store';
import { Keys } from '../core/keys';
import { Intake } from '../intake/intake';
import { PinRequest } from '../intake/pin-request';
import { MapWish } from '../map/map-wish';
import { StormMap } from '../map/storm-map';
import { CallPanel } from './call-panel';
import { Queue } from './queue';

/** In the address: the call that is open, or this word while one is being taken. */
const NEW_CALL = 'new';

/** The dispatcher's board: the queue, the map, and beside them the open call or the one being taken. */
@Component({
  selector: 'thaw-board-page',
  imports: [CallPanel, Intake, Queue, StormMap],
  templateUrl: './board-page.html',
  styleUrl: './board-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class.has-panel]': 'side() !== "none"', '[class.map-first]': 'isMapFirst()' },
})
export class BoardPage {
  private readonly board = inject(BoardStore);
  private readonly router = inject(Router);
  private readonly location = inject(Location);
  private readonly injector = inject(Injector);
  private readonly pins = inject(PinRequest);
  private readonly mapWish = inject(MapWish);

  /** From the address, so that a reload or a link opens the call again. */
  readonly call = input<string>();

  private readonly queue = viewChild(Queue);
  private readonly panel = viewChild(CallPanel);
  private readonly map = viewChild<ElementRef<HTMLElement>>('map');
  private readonly wantsMap = signal(false);

  private readonly shown = linkedSignal<string | null>(() => this.call() ?? null);
  protected readonly openCallId = computed(() => {
    const shown = this.shown();
    return shown === NEW_CALL ? null : shown;
  });
  protected readonly side = computed<'none' | 'intake' | 'call'>(() => {
    if (this.shown() === NEW_CALL) return 'intake';
    return this.openCallId() === null ? 'none' : 'call';
  });
  /** On a small screen the map takes the place of the panel while a point on it is asked for. */
  protected readonly isMapFirst = computed(() => this.wantsMap() || this.pins.wanted() !== null);

  constructor() {
    // After a reload, or from a link, the open call is the selected one in queue and map.
    effect(() => {
      const open = this.openCallId();
      if (open !== null) untracked(() => this.board.selectedCallId.set(open));
    });
    this.registerKeys();
  }

  protected open(callId: string): void {
    this.board.selectedCallId.set(callId);
    this.wantsMap.set(false);
    this.show(callId);
    // The intake is gone, and on a small screen the queue makes room: the cursor goes to the call.
    this.afterRender(() => {
      const active = document.activeElement;
      if (active === document.body || active?.checkVisibility?.() === false) this.panel()?.focus();
    });
  }

  protected take(): void {
    this.wantsMap.set(false);
    this.show(NEW_CALL);
  }

  /** Closes what is beside the queue; the cursor goes back to the rows. */
  protected close(): void {
    this.show(null);
    this.afterRender(() => this.queue()?.focus());
  }

  protected toggleMap(): void {
    this.wantsMap.update((wants) => !wants);
    if (!this.wantsMap()) return;
    if (this.board.selectedCallId() !== null) this.mapWish.show('selected-call');
    this.afterRender(() =>
      this.map()?.nativeElement.querySelector<HTMLElement>('[tabindex="0"]')?.focus(),
    );
  }

  /**
   * The address follows without a navigation: that would move the focus, which the dispatcher has
   * just put where it belongs.
   */
  private show(call: string | null): void {
    this.shown.set(call);
    this.location.replaceState('/board', call === null ? '' : `call=${encodeURIComponent(call)}`);
  }

  /** Does something with the selected call, opening it first. */
  private withSelected(act: (panel: CallPanel) => Promise<void>): void {
    const selected = this.board.selectedCallId() ?? this.openCallId();
    if (selected === null) return;
    if (selected !== this.openCallId()) this.open(selected);
    this.afterRender(() => {
      const panel = this.panel();
      if (panel) void act(panel);
    });
  }

  private afterRender(act: () => void): void {
    afterNextRender(act, { injector: this.injector });
  }

  private registerKeys(): void {
    const scope = 'Queue';
    const hasCall = (): boolean =>
      this.board.selectedCallId() !== null || this.openCallId() !== null;
    inject(Keys).register(
      [
        { keys: 'n', does: 'Take a new call', scope, run: () => this.take() },
        {
          keys: 'c',
          does: 'Claim the call, or release it',
          scope,
          when: hasCall,
          run: () => this.withSelected((panel) => panel.toggleClaim()),
        },
        {
          keys: 'p',
          does: 'Start the phone check',
          scope,
          when: hasCall,
          run: () => this.withSelected((panel) => panel.startCheck()),
        },
        { keys: 'm', does: 'Show the map, or the call again', scope, run: () => this.toggleMap() },
        {
          keys: 'v',
          does: 'Plan the visit on the routes screen',
          scope,
          when: hasCall,
          run: () =>
            void this.router.navigate(['/routes'], {
              queryParams: { call: this.board.selectedCallId() ?? this.openCallId() },
            }),
        },
      ],
      inject(DestroyRef),
    );
  }
}
