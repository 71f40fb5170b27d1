import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { CompartmentGlyph } from '../board/compartment-glyph';
import type { StripPiece } from './strip-piece';

/**
 * The piece of a cold strip below a visit: a line while cold, a hatch while at risk, dots past the
 * save-by, and the sign of what is lost next at its save-by or at the end towards it.
 */
@Component({
  selector: 'thaw-strip-piece',
  imports: [CompartmentGlyph],
  template: `
    @if (piece(); as piece) {
      <span class="lanes">
        @for (lane of piece.lanes; track lane.kind) {
          <span class="lane" [style.--risk.px]="lane.riskX" [style.--lost.px]="lane.lostX"></span>
        } @empty {
          <span class="lane" style="--risk: 0px; --lost: 0px"></span>
        }
        @if (piece.sign; as sign) {
          <thaw-compartment-glyph
            [kind]="sign.kind"
            [state]="sign.state"
            [class]="sign.beyond ?? 'here'"
            [style.left.px]="sign.x"
          />
        }
      </span>
      @if (piece.width >= wordsPx) {
        <span class="spare">{{ words() }}</span>
      }
    }
  `,
  styleUrl: './strip-piece-view.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { 'aria-hidden': 'true', '[style.inline-size.px]': 'piece()?.width' },
})
export class StripPieceView {
  /** Room for "1 h 40"; less of it would say nothing. */
  protected readonly wordsPx = 40;
  readonly piece = input.required<StripPiece | null>();
  /** "1 h 40", "too late". */
  readonly words = input.required<string>();
}
