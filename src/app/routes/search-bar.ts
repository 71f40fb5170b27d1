import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  effect,
  inject,
  input,
  output,
  signal,
} from '@angular/core';
import { Clock } from '../core/clock';
import type { RunningSearch } from './routes-model';

const SECONDS: readonly number[] = [1, 2, 5, 10];
const TICK_MS = 200;

/** Starts a search for routes and shows how far it is. */
@Component({
  selector: 'thaw-search-bar',
  template: `
    <button
      type="button"
      class="plain main"
      [disabled]="search() !== null || !isAble()"
      (click)="proposed.emit(seconds())"
    >
      Propose routes <kbd>R</kbd>
    </button>
    <label>
      Search for
      <select #choice [disabled]="search() !== null" (change)="seconds.set(+choice.value)">
        @for (one of choices; track one) {
          <option [value]="one" [selected]="one === seconds()">{{ one }} s</option>
        }
      </select>
    </label>
    @if (search()) {
      <span class="progress" role="status">
        <progress max="1" [value]="share()" aria-label="Search for routes"></progress>
        {{ share() < 1 ? 'Searching' : 'Writing the proposal down' }}
      </span>
    }
  `,
  styles: `
    :host {
      display: contents;
    }
    label,
    .progress {
      display: inline-flex;
      align-items: center;
      gap: 6px;
      white-space: nowrap;
    }
    select {
      inline-size: auto;
    }
    .main kbd {
      color: inherit;
      border-color: currentcolor;
    }
    .main:disabled {
      border-color: var(--thaw-rule-strong);
      background: var(--thaw-sunken);
    }
    progress {
      inline-size: 120px;
    }
  `,
  styleUrl: '../intake/fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SearchBar {
  private readonly clock = inject(Clock);

  readonly search = input.required<RunningSearch | null>();
  readonly isAble = input(true);
  readonly proposed = output<number>();

  protected readonly choices = SECONDS;
  readonly seconds = signal(2);
  protected readonly share = signal(0);

  constructor() {
    let timer: ReturnType<typeof setInterval> | undefined;
    effect(() => {
      const search = this.search();
      clearInterval(timer);
      if (!search) return;
      const tick = (): void =>
        this.share.set(
          Math.min((this.clock.exact() - search.startedAt) / (search.seconds * 1000), 1),
        );
      tick();
      timer = setInterval(tick, TICK_MS);
    });
    inject(DestroyRef).onDestroy(() => clearInterval(timer));
  }
}
