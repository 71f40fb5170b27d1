import { ChangeDetectionStrategy, Component, computed, inject, input, output } from '@angular/core';
import type { CallRow } from '@shared/contract/calls';
import { STATE_WORDS } from '@shared/domain/call-state';
import { nextSaveBy, stripFactsOf } from '../board/cold-strip-scale';
import { ColdStrip } from '../board/cold-strip';
import { CompartmentGlyph } from '../board/compartment-glyph';
import { fromNowWords, whenWords } from '../board/time-words';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';
import { addressWords, shortPlaceDoubt } from '../intake/address-words';
import { markFace } from './mark-face';

/** How many calls in one place are listed; the others are a zoom step away. */
const MOST_ROWS = 8;

/** What is known of the call under the pointer, or a list when several stand in one place. */
@Component({
  selector: 'thaw-call-popover',
  imports: [ColdStrip, CompartmentGlyph],
  templateUrl: './call-popover.html',
  styleUrl: './call-popover.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class CallPopover {
  protected readonly clock = inject(Clock);
  protected readonly addressWords = addressWords;
  private readonly zone = inject(Zone);

  /** The most urgent first. */
  readonly calls = input.required<readonly CallRow[]>();
  readonly selectedId = input<string | null>(null);
  /** With buttons; without, it only tells. */
  readonly isPinned = input(false);
  readonly selected = output<string>();
  readonly opened = output<string>();
  readonly closed = output();
  readonly closer = output();

  protected readonly rows = computed(() =>
    this.calls()
      .slice(0, MOST_ROWS)
      .map((call) => ({ call, face: markFace(call, this.clock.now()), ...this.words(call) })),
  );
  protected readonly more = computed(() => Math.max(0, this.calls().length - MOST_ROWS));

  private words(call: CallRow) {
    const now = this.clock.now();
    const facts = stripFactsOf(call);
    const saveBy = nextSaveBy(facts, now);
    return {
      facts,
      state: STATE_WORDS[call.state],
      shortDoubt: shortPlaceDoubt(call.address.kind),
      saveBy:
        saveBy === null
          ? 'Nothing left to save'
          : `Save by ${whenWords(saveBy, now, this.zone.name())}, ${fromNowWords(saveBy, now)}`,
      shortSaveBy: saveBy === null ? 'none left' : whenWords(saveBy, now, this.zone.name()),
    };
  }
}
