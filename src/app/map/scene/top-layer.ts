import { ViewLayer } from './view-layer';
import type { View } from '../world';

/** Draws what is in view, in CSS pixels from the top left corner; `null` when there is nothing to see. */
export type Paint = (
  view: View,
  pixelRatio: number,
) => ((ctx: CanvasRenderingContext2D) => void) | null;

/** What moves with the pointer: little, and drawn at once. */
export class TopLayer extends ViewLayer {
  private readonly ctx = this.canvas.getContext('2d');
  protected readonly isBusy = false;

  constructor(private readonly paint: Paint) {
    super();
  }

  protected override draw(view: View, pixelRatio: number): void {
    const draw = this.paint(view, pixelRatio);
    const { canvas, ctx } = this;
    if (!this.show(view, draw !== null) || !draw || !ctx) return;
    const [width, height] = [view.width, view.height].map((px) => Math.round(px * pixelRatio));
    if (canvas.width !== width) canvas.width = width!;
    if (canvas.height !== height) canvas.height = height!;
    ctx.setTransform(pixelRatio, 0, 0, pixelRatio, 0, 0);
    ctx.clearRect(0, 0, view.width, view.height);
    draw(ctx);
  }
}
