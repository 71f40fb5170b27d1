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
import { MatButton } from '@angular/material/button';
import type { WhatIf, WhatIfDto } from '@shared/contract/forecast';
import type { DrainDto } from '@shared/contract/office';
import { Api } from '../../core/api';
import { ProblemError } from '../../core/problem-error';
import { Zone } from '../../core/zone';
import { ChartCanvas } from '../chart-canvas';
import { drawWhatIf } from './draw-what-if';
import { ForecastTable } from './forecast-table';
import { differenceWords, emptyWords } from './outlook-words';
import { changeWords, FIELDS, NOTHING_CHANGED, readField } from './what-if-fields';

/** Lets the manager try a change of the crew. Nothing is changed by it; the answer is a simulation's. */
@Component({
  selector: 'thaw-what-if',
  imports: [ChartCanvas, ForecastTable, MatButton],
  templateUrl: './what-if.html',
  styleUrl: './ahead.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class WhatIfPanel {
  private readonly api = inject(Api);
  private readonly zone = inject(Zone);
  private stopper: AbortController | null = null;

  readonly stormId = input.required<string>();
  readonly drain = input.required<DrainDto>();
  readonly isNarrow = input(false);

  protected readonly fields = FIELDS;
  /** What stands in each field, as typed. */
  protected readonly typed = signal<Readonly<Record<keyof WhatIf, string>>>(
    Object.fromEntries(FIELDS.map(({ key }) => [key, '0'])) as Record<keyof WhatIf, string>,
  );
  protected readonly isAsking = signal(false);
  protected readonly trouble = signal('');
  private readonly given = signal<WhatIfDto | null>(null);

  protected readonly answer = computed(() => {
    const given = this.given();
    if (!given) return null;
    const clock = (at: number): string => this.zone.dayTime(at);
    return {
      ...given,
      title: changeWords(given.change),
      words: differenceWords(given, clock),
      then: emptyWords(given.changed, this.drain(), clock),
      draw: drawWhatIf(given, this.zone.name(), this.isNarrow()),
    };
  });

  constructor() {
    inject(DestroyRef).onDestroy(() => this.stop());
    effect(() => {
      this.stormId();
      untracked(() => {
        this.stop();
        this.given.set(null);
      });
    });
  }

  protected set(key: keyof WhatIf, value: string): void {
    this.typed.update((all) => ({ ...all, [key]: value }));
  }

  protected async ask(): Promise<void> {
    const change: Record<keyof WhatIf, number> = { ...NOTHING_CHANGED };
    for (const field of FIELDS) {
      const read = readField(field, this.typed()[field.key]);
      if (typeof read === 'string') return this.trouble.set(read);
      change[field.key] = read;
    }
    if (FIELDS.every(({ key }) => change[key] === 0))
      return this.trouble.set('Change a number first: with all at 0 everything stays as it is.');
    this.stop();
    const stopper = (this.stopper = new AbortController());
    this.trouble.set('');
    this.isAsking.set(true);
    try {
      const args = { params: { stormId: this.stormId() }, body: change };
      this.given.set(await this.api.callUntil(stopper.signal, 'whatIf', args));
    } catch (error) {
      if (stopper.signal.aborted) return;
      if (!(error instanceof ProblemError)) throw error;
      this.trouble.set(error.message);
    } finally {
      if (this.stopper === stopper) this.isAsking.set(false);
    }
  }

  /** Takes the question back; the last answer stays. */
  protected stop(): void {
    this.stopper?.abort();
    this.stopper = null;
    this.isAsking.set(false);
  }
}
