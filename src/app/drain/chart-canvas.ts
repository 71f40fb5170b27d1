import {
  afterRenderEffect,
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  type ElementRef,
  inject,
  input,
  viewChild,
} from '@angular/core';
import {
  Chart,
  type ChartConfiguration,
  Filler,
  LinearScale,
  LineController,
  LineElement,
  PointElement,
  Tooltip,
} from 'chart.js';
import { Theme } from '../core/theme';
import { endLabels } from './end-labels';
import { inkOf, type Ink } from './ink';

Chart.register(Filler, LinearScale, LineController, LineElement, PointElement, Tooltip, endLabels);

export type LineConfig = ChartConfiguration<'line', { x: number; y: number }[]>;
/** Draws with the colours of the page as it is now. */
export type Draw = (ink: Ink) => LineConfig;

/** A line chart that follows the theme, and says in words what it shows. */
@Component({
  selector: 'thaw-chart-canvas',
  template: '<canvas #canvas role="img" [attr.aria-label]="words()"></canvas>',
  styles: `
    :host {
      display: block;
      position: relative;
      min-inline-size: 0;
      min-block-size: 0;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ChartCanvas {
  private readonly theme = inject(Theme);
  private readonly canvas = viewChild.required<ElementRef<HTMLCanvasElement>>('canvas');
  private chart: Chart<'line', { x: number; y: number }[]> | null = null;

  readonly draw = input.required<Draw>();
  readonly words = input.required<string>();

  constructor() {
    afterRenderEffect(() => {
      this.theme.scheme();
      this.theme.hasMoreContrast();
      this.show(this.draw());
    });
    inject(DestroyRef).onDestroy(() => this.chart?.destroy());
  }

  private show(draw: Draw): void {
    const context = this.canvas().nativeElement.getContext('2d');
    // No canvas, no picture; the table holds the same figures.
    if (!context) return;
    const config = draw(inkOf(this.theme, context));
    if (this.chart) {
      this.chart.data = config.data;
      this.chart.options = config.options ?? {};
      this.chart.update('none');
    } else {
      this.chart = new Chart(context, config);
    }
  }
}
