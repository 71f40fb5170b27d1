import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  ElementRef,
  inject,
  Injector,
  input,
  signal,
  viewChild,
} from '@angular/core';
import { Router } from '@angular/router';
import { BoardStore } from '../core/board-store';
import { Keys } from '../core/keys';
import { Intake } from '../intake/intake';
import { PinRequest } from '../intake/pin-request';
import { CallPanel } from './call-panel';
import { Queue } from './queue';

/** In the address: the call that is open, or this word while one is being taken. */
const NEW_CALL = 'new';

/** The dispatcher's board: the queue, the map, and beside them the open call or the one being taken. */
@Component({
  selector: 'thaw-board-page',
  imports: [CallPanel, Intake, Queue],
  templateUrl: './board-page.html',
  styleUrl: './board-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class.has-panel]': 'side() !== "none"', '[class.map-first]': 'isMapFirst()' },
})
export class BoardPage {
  private readonly board = inject(BoardStore);
  private readonly router = inject(Router);
  private readonly injector = inject(Injector);
  private readonly pins = inject(PinRequest);

  /** From the address, so that a reload opens the same call again. */
  readonly call = input<string>();

  private readonly queue = viewChild(Queue);
  private readonly panel = viewChild(CallPanel);
  private readonly map = viewChild<ElementRef<HTMLElement>>('map');
  private readonly wantsMap = signal(false);

  protected readonly side = computed<'none' | 'intake' | 'call'>(() => {
    const call = this.call();
    if (!call) return 'none';
    return call === NEW_CALL ? 'intake' : 'call';
  });
  /** On a small screen the map takes the place of the panel while a point on it is asked for. */
  protected readonly isMapFirst = computed(() => this.wantsMap() || this.pins.wanted() !== null);

  constructor() {
    this.registerKeys();
  }

  protected async open(callId: string): Promise<void> {
    this.board.selectedCallId.set(callId);
    this.wantsMap.set(false);
    await this.show(callId);
  }

  protected async take(): Promise<void> {
    this.wantsMap.set(false);
    await this.show(NEW_CALL);
  }

  /** Closes what is beside the queue; the cursor goes back to the rows. */
  protected async close(): Promise<void> {
    await this.show(null);
    this.queue()?.focus();
  }

  protected toggleMap(): void {
    this.wantsMap.update((wants) => !wants);
    if (this.wantsMap()) {
      afterNextRender(
        () => this.map()?.nativeElement.querySelector<HTMLElement>('[tabindex="0"]')?.focus(),
        { injector: this.injector },
      );
    }
  }

  private async show(call: string | null): Promise<void> {
    await this.router.navigate([], {
      queryParams: { call },
      queryParamsHandling: 'merge',
      replaceUrl: true,
    });
  }

  /** Does something with the selected call, opening it first. */
  private async withSelected(act: (panel: CallPanel) => Promise<void>): Promise<void> {
    const selected = this.board.selectedCallId() ?? this.openCallId();
    if (selected === null) return;
    if (selected !== this.openCallId()) await this.open(selected);
    afterNextRender(
      () => {
        const panel = this.panel();
        if (panel) void act(panel);
      },
      { injector: this.injector },
    );
  }

  private openCallId(): string | null {
    const call = this.call();
    return call && call !== NEW_CALL ? call : null;
  }

  private registerKeys(): void {
    const scope = 'Queue';
    const hasCall = (): boolean =>
      this.board.selectedCallId() !== null || this.openCallId() !== null;
    inject(Keys).register(
      [
        { keys: 'n', does: 'Take a new call', scope, run: () => void this.take() },
        {
          keys: 'c',
          does: 'Claim the call, or release it',
          scope,
          when: hasCall,
          run: () => void this.withSelected((panel) => panel.toggleClaim()),
        },
        {
          keys: 'p',
          does: 'Start the phone check',
          scope,
          when: hasCall,
          run: () => void this.withSelected((panel) => panel.startCheck()),
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
