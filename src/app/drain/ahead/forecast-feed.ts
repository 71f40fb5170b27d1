import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { ForecastDto, PartsAheadDto } from '@shared/contract/forecast';
import { MINUTE_MS } from '@shared/domain/instant';
import { Api } from '../../core/api';
import { Clock } from '../../core/clock';
import { ProblemError } from '../../core/problem-error';
import { DrainFeed } from '../drain-feed';

/** What lies ahead of the storm that is shown, asked for once a minute; a closed storm has nothing ahead. */
@Injectable()
export class ForecastFeed {
  private readonly api = inject(Api);
  private readonly clock = inject(Clock);
  private readonly drain = inject(DrainFeed);

  private readonly forecastKnown = signal<ForecastDto | null>(null);
  private readonly partsKnown = signal<PartsAheadDto | null>(null);
  private readonly failure = signal<string | null>(null);
  private asked = 0;

  /** `null` before the first answer, and for a storm that is closed. */
  readonly forecast = this.forecastKnown.asReadonly();
  readonly parts = this.partsKnown.asReadonly();
  readonly problem = this.failure.asReadonly();

  /** The storm to look ahead of. */
  readonly stormId = computed(() =>
    this.drain.isOpen() ? (this.drain.storm()?.id ?? null) : null,
  );
  private readonly minute = computed(() => Math.floor(this.clock.now() / MINUTE_MS));
  private shownStormId: string | null = null;

  constructor() {
    inject(DestroyRef).onDestroy(() => this.asked++);
    effect(() => {
      const id = this.stormId();
      this.minute();
      untracked(() => {
        if (this.shownStormId !== id) {
          this.forecastKnown.set(null);
          this.partsKnown.set(null);
        }
        this.shownStormId = id;
        void this.ask(id);
      });
    });
  }

  private async ask(stormId: string | null): Promise<void> {
    const asked = ++this.asked;
    if (stormId === null) return;
    try {
      const params = { stormId };
      const [forecast, parts] = await Promise.all([
        this.api.call('forecast', { params }),
        this.api.call('partsAhead', { params, query: {} }),
      ]);
      if (asked !== this.asked) return;
      this.forecastKnown.set(forecast);
      this.partsKnown.set(parts);
      this.failure.set(null);
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (asked === this.asked) this.failure.set(error.message);
    }
  }
}
