import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  effect,
  type ElementRef,
  inject,
  output,
  signal,
  viewChildren,
} from '@angular/core';
import { Theme } from '../core/theme';
import { readInk } from './map-ink';
import { drawMark, type MarkLook } from './mark-sprites';
import { StormRoadLegend } from './storm-road-legend';

const SIZE_PX = 34;

/** What the marks mean, drawn by the very code that draws them on the map. */
@Component({
  selector: 'thaw-map-legend',
  imports: [StormRoadLegend],
  templateUrl: './map-legend.html',
  styleUrls: ['./map-panel.scss', './map-legend.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MapLegend {
  private readonly theme = inject(Theme);
  readonly closed = output();

  private readonly canvases = viewChildren<ElementRef<HTMLCanvasElement>>('mark');
  private readonly isRendered = signal(false);
  protected readonly size = SIZE_PX;
  protected readonly marks: readonly { readonly words: string; readonly look: MarkLook }[] = [
    {
      words: 'Second outline: the next is lost within the hour',
      look: look('freezer', 'now'),
    },
    {
      words: 'Filled, warm: within four hours, or medicine at risk',
      look: look('freezer', 'soon'),
    },
    { words: 'Filled, cold: later', look: look('freezer', 'later') },
    { words: 'Hollow: nothing left to save', look: look('freezer', 'none') },
    { words: 'F, round: fresh food', look: look('fresh-food', 'later') },
    { words: 'Z, six sides: freezer', look: look('freezer', 'later') },
    { words: 'M, on its tip: medicine', look: look('medicine', 'later') },
    { words: 'C, square: commercial stock', look: look('commercial-stock', 'later') },
    {
      words: 'With a foot: on a technician’s route',
      look: look('fresh-food', 'soon', { isOnRoute: true }),
    },
    {
      words: 'With a triangle: somebody may be in danger',
      look: look('fresh-food', 'soon', { hasDanger: true }),
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
      const mark = this.marks[i];
      const ctx = canvas.getContext('2d');
      if (!mark || !ctx) return;
      canvas.width = canvas.height = SIZE_PX * ratio;
      ctx.setTransform(ratio, 0, 0, ratio, (SIZE_PX / 2) * ratio, (SIZE_PX / 2 - 1) * ratio);
      drawMark(ctx, mark.look, ink);
    });
  }
}

const look = (
  kind: MarkLook['kind'],
  press: MarkLook['press'],
  more: Partial<MarkLook> = {},
): MarkLook => ({ kind, press, isOnRoute: false, hasDanger: false, ...more });
