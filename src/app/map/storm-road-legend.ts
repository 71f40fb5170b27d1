import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  effect,
  type ElementRef,
  inject,
  signal,
  viewChildren,
} from '@angular/core';
import type { StormRoadKind } from '@shared/domain/roads/conditions';
import { Theme } from '../core/theme';
import { readInk } from './map-ink';
import { paintSign } from './storm-road-signs';
import type { StormRoadTense } from './storm-road-words';

const SIZE_PX = 34;

/** The signs of storm roads, drawn by the very code that draws them on the map. */
@Component({
  selector: 'thaw-storm-road-legend',
  template: `
    <ul>
      @for (sign of signs; track sign.words) {
        <li>
          <canvas
            #sign
            aria-hidden="true"
            [style.inline-size.px]="size"
            [style.block-size.px]="size"
          ></canvas>
          <span>{{ sign.words }}</span>
        </li>
      }
    </ul>
  `,
  styleUrls: ['./map-panel.scss', './map-legend.scss'],
  styles: ':host { display: block; overflow: visible; flex: none; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StormRoadLegend {
  private readonly theme = inject(Theme);
  private readonly canvases = viewChildren<ElementRef<HTMLCanvasElement>>('sign');
  private readonly isRendered = signal(false);
  protected readonly size = SIZE_PX;
  protected readonly signs: readonly {
    readonly words: string;
    readonly kind: StormRoadKind;
    readonly tense: StormRoadTense;
  }[] = [
    { words: 'A bar, crosses along the road: closed', kind: 'closed', tense: 'now' },
    { words: 'Waves, a double line: flooded', kind: 'flooded', tense: 'now' },
    { words: 'A number, dots: slow; percent of the usual speed', kind: 'slow', tense: 'now' },
    { words: 'Hollow, broken line: begins later, or is over', kind: 'closed', tense: 'later' },
    {
      words: 'A question mark: reported by a technician, not confirmed',
      kind: 'flooded',
      tense: 'reported',
    },
  ];

  constructor() {
    afterNextRender(() => this.isRendered.set(true));
    effect(() => {
      this.theme.scheme();
      this.theme.hasMoreContrast();
      if (!this.isRendered()) return;
      const canvases = this.canvases();
      // The page's colours follow in the same turn; a frame later they are certain.
      requestAnimationFrame(() => this.paint(canvases.map((one) => one.nativeElement)));
    });
  }

  private paint(canvases: readonly HTMLCanvasElement[]): void {
    const ink = readInk(this.theme);
    const ratio = window.devicePixelRatio || 1;
    canvases.forEach((canvas, i) => {
      const sign = this.signs[i];
      const ctx = canvas.getContext('2d');
      if (!sign || !ctx) return;
      canvas.width = canvas.height = SIZE_PX * ratio;
      ctx.setTransform(ratio, 0, 0, ratio, (SIZE_PX / 2) * ratio, (SIZE_PX / 2) * ratio);
      paintSign(ctx, { x: 0, y: 0 }, { kind: sign.kind, speedShare: 0.4 }, sign.tense, ink);
    });
  }
}
