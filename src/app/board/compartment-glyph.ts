import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { CompartmentKind } from '@shared/domain/cold-unit';
import { COMPARTMENT_SHAPES } from './compartment-shapes';
import { COMPARTMENT_WORDS } from './compartment-words';
import type { StripState } from './cold-strip-scale';

/**
 * The sign of a compartment: its kind by shape and letter, its state by fill and stroke, so that
 * neither needs colour. Filled: can still be saved. Hollow and struck through: past its save-by.
 */
@Component({
  selector: 'thaw-compartment-glyph',
  template: `<svg viewBox="-10 -10 20 20" aria-hidden="true" focusable="false">
    <path class="shape" [attr.d]="shape()" />
    <text class="letter" y="4.4" text-anchor="middle">{{ letter() }}</text>
    @if (state() === 'lost') {
      <path class="struck" d="M-9 9L9 -9" />
    }
  </svg>`,
  styleUrl: './compartment-glyph.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class]': 'state()' },
})
export class CompartmentGlyph {
  readonly kind = input.required<CompartmentKind>();
  readonly state = input<StripState>('still-safe');

  protected readonly shape = computed(() => COMPARTMENT_SHAPES[this.kind()]);
  protected readonly letter = computed(() => COMPARTMENT_WORDS[this.kind()].letter);
}
