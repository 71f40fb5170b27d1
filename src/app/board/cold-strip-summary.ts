import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { Instant } from '@shared/domain/instant';
import { ColdRuler } from './cold-ruler';
import type { StripFacts } from './cold-strip-scale';
import { CompartmentGlyph } from './compartment-glyph';
import { COMPARTMENT_WORDS } from './compartment-words';
import { useRulerBackground } from './ruler-background';
import { saveByFront } from './save-by-front';

/**
 * All cold strips of a storm summed up on the one ruler: for each kind of compartment, how many
 * come to their save-by in which hours. The numbers stand in the picture and in a sentence.
 */
@Component({
  selector: 'thaw-cold-strip-summary',
  imports: [ColdRuler, CompartmentGlyph],
  templateUrl: './cold-strip-summary.html',
  styleUrl: './cold-strip-summary.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ColdStripSummary {
  readonly calls = input.required<readonly StripFacts[]>();
  readonly now = input.required<Instant>();

  protected readonly names = COMPARTMENT_WORDS;
  protected readonly lanes = computed(() => {
    const front = saveByFront(this.calls(), this.now());
    const most = Math.max(1, ...front.flatMap((lane) => lane.bars.map((bar) => bar.count)));
    return front.map((lane) => ({
      ...lane,
      bars: lane.bars.map((bar) => ({ ...bar, height: bar.count / most })),
    }));
  });

  protected readonly words = computed(() =>
    this.lanes()
      .map(({ kind, bars, lost, later }) => {
        const soon = bars
          .filter(({ count }) => count > 0)
          .map(({ count, fromHours, toHours }) => `${count} in ${fromHours} to ${toHours} hours`);
        const parts = [`${lost} past their save-by`, ...soon, `${later} later`];
        return `${COMPARTMENT_WORDS[kind].name}: ${parts.join(', ')}.`;
      })
      .join(' '),
  );

  constructor() {
    useRulerBackground();
  }
}
