import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import type { Instant } from '@shared/domain/instant';
import { Zone } from '../core/zone';
import { lanesByKind, lanesOfEach, type StripFacts } from './cold-strip-scale';
import { laneWords, stripWords } from './cold-strip-words';
import { ColdRuler } from './cold-ruler';
import { useRulerBackground } from './ruler-background';
import { CompartmentGlyph } from './compartment-glyph';
import { whenWords } from './time-words';

/** `row`: a line of the queue. `panel` and `phone`: a lane for each compartment, with its words. */
export type StripSize = 'row' | 'panel' | 'phone';

/**
 * The picture of a call: on one ruler of hours a thin line while the contents are cold as far as
 * published limits go, a hatched span while they are at risk, and a lettered tick at the save-by.
 */
@Component({
  selector: 'thaw-cold-strip',
  imports: [ColdRuler, CompartmentGlyph],
  templateUrl: './cold-strip.html',
  styleUrl: './cold-strip.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: {
    role: 'img',
    '[attr.aria-label]': 'words()',
    '[class]': '"size-" + size()',
    '[style.--lanes]': 'lanes().length || 1',
  },
})
export class ColdStrip {
  private readonly zone = inject(Zone);

  readonly facts = input.required<StripFacts>();
  readonly now = input.required<Instant>();
  readonly size = input<StripSize>('row');
  /** With `panel` and `phone`: where each compartment is, in the order of the facts. */
  readonly places = input<readonly string[]>([]);

  protected readonly lanes = computed(() =>
    this.size() === 'row'
      ? lanesByKind(this.facts(), this.now())
      : lanesOfEach(this.facts(), this.now()),
  );

  protected readonly laneWords = computed(() =>
    this.lanes().map((lane) => laneWords(lane, this.now(), this.clock)),
  );

  protected readonly words = computed(() => stripWords(this.lanes(), this.now(), this.clock));

  constructor() {
    useRulerBackground();
  }

  private readonly clock = (at: Instant): string => whenWords(at, this.now(), this.zone.name());
}
