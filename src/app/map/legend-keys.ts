import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  effect,
  type ElementRef,
  inject,
  input,
  signal,
  viewChildren,
} from '@angular/core';
import { Theme } from '../core/theme';
import { type MapInk, readInk } from './map-ink';

const SIZE_PX = 34;

/** A sign of the map and what it means. */
export interface LegendKey {
  readonly words: string;
  /** Draws the sign around the canvas's origin, by the very code that draws it on the map. */
  readonly draw: (ctx: CanvasRenderingContext2D, ink: MapInk) => void;
}

/** Signs of the map with their meanings, in the colours of the page. */
@Component({
  selector: 'thaw-legend-keys',
  template: `
    <ul>
      @for (key of keys(); track key.words) {
        <li>
          <canvas
            #sign
            aria-hidden="true"
            [style.inline-size.px]="size"
            [style.block-size.px]="size"
          ></canvas>
          <span>{{ key.words }}</span>
        </li>
      }
    </ul>
  `,
  styleUrls: ['./map-panel.scss', './map-legend.scss'],
  styles: ':host { display: block; overflow: visible; flex: none; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class LegendKeys {
  private readonly theme = inject(Theme);
  private readonly canvases = viewChildren<ElementRef<HTMLCanvasElement>>('sign');
  private readonly isRendered = signal(false);
  protected readonly size = SIZE_PX;
  readonly keys = input.required<readonly LegendKey[]>();

  constructor() {
    afterNextRender(() => this.isRendered.set(true));
    effect(() => {
      this.theme.scheme();
      this.theme.hasMoreContrast();
      if (!this.isRendered()) return;
      const canvases = this.canvases();
      const keys = this.keys();
      // The page's colours follow in the same turn; a frame later they are certain.
      requestAnimationFrame(() =>
        this.paint(
          canvases.map((one) => one.nativeElement),
          keys,
        ),
      );
    });
  }

  private paint(canvases: readonly HTMLCanvasElement[], keys: readonly LegendKey[]): void {
    const ink = readInk(this.theme);
    const ratio = window.devicePixelRatio || 1;
    const middle = (SIZE_PX / 2) * ratio;
    canvases.forEach((canvas, i) => {
      const ctx = canvas.getContext('2d');
      if (!ctx) return;
      canvas.width = canvas.height = SIZE_PX * ratio;
      ctx.setTransform(ratio, 0, 0, ratio, middle, middle);
      keys[i]?.draw(ctx, ink);
    });
  }
}
