import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { CompartmentKind } from '@shared/domain/cold-unit';
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

/** Round for what is fresh, six-sided like ice, a lozenge for medicine, a crate for stock. */
export const COMPARTMENT_SHAPES: Readonly<Record<CompartmentKind, string>> = {
  'fresh-food': 'M0 -9A9 9 0 1 1 0 9A9 9 0 1 1 0 -9Z',
  freezer: 'M-4.9 -8.6H4.9L9.6 0L4.9 8.6H-4.9L-9.6 0Z',
  medicine: 'M0 -9.8L9.8 0L0 9.8L-9.8 0Z',
  'commercial-stock': 'M-8.2 -8.2H8.2V8.2H-8.2Z',
};
