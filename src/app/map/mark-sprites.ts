import { COMPARTMENT_SHAPES } from '../board/compartment-shapes';
import { COMPARTMENT_WORDS } from '../board/compartment-words';
import type { DrawnMark, Press } from './call-mark';
import { font, type MapInk } from './map-ink';
import { MARK_RADIUS } from './mark-places';
import { scratchCanvas } from './scratch-canvas';

/** The shapes of compartments are drawn in a square from -10 to 10. */
const SHAPE_RADIUS = 10;
const RIM_PX = 2.5;
/** Room around a mark for its second outline, its foot and its badge. */
const MARGIN_PX = 8;

export type MarkLook = Pick<DrawnMark, 'kind' | 'press' | 'isOnRoute'> & {
  readonly hasDanger: boolean;
};

/**
 * Pictures of marks, drawn once for each look: three thousand marks are then three thousand copies
 * of a few dozen pictures.
 */
export class MarkSprites {
  private readonly made = new Map<string, OffscreenCanvas>();

  constructor(
    private readonly ink: MapInk,
    private readonly pixelRatio: number,
  ) {}

  stamp(ctx: CanvasRenderingContext2D, look: MarkLook, x: number, y: number): void {
    const key = `${look.kind} ${look.press} ${look.isOnRoute} ${look.hasDanger}`;
    let sprite = this.made.get(key);
    if (!sprite) {
      sprite = this.draw(look);
      this.made.set(key, sprite);
    }
    const size = sprite.width / this.pixelRatio;
    ctx.drawImage(sprite, x - size / 2, y - size / 2, size, size);
  }

  /** A call that has no room for its shape: filled while something can be saved, else a ring. */
  dot(ctx: CanvasRenderingContext2D, press: Press, radius: number, x: number, y: number): void {
    const key = `${press} ${radius}`;
    let sprite = this.made.get(key);
    if (!sprite) {
      sprite = this.canvas(Math.ceil(radius) + 2, (pen) => drawDot(pen, press, radius, this.ink));
      this.made.set(key, sprite);
    }
    const size = sprite.width / this.pixelRatio;
    ctx.drawImage(sprite, x - size / 2, y - size / 2, size, size);
  }

  private draw(look: MarkLook): OffscreenCanvas {
    const half = Math.ceil(MARK_RADIUS[look.press] + MARGIN_PX);
    return this.canvas(half, (pen) => drawMark(pen, look, this.ink));
  }

  /** @param half half the side of the picture; its middle is the origin of what is drawn */
  private canvas(half: number, draw: (pen: CanvasRenderingContext2D) => void): OffscreenCanvas {
    const { canvas, pen } = scratchCanvas(Math.ceil(2 * half * this.pixelRatio));
    pen.scale(canvas.width / (2 * half), canvas.height / (2 * half));
    pen.translate(half, half);
    draw(pen);
    return canvas;
  }
}

function drawDot(ctx: CanvasRenderingContext2D, press: Press, radius: number, ink: MapInk): void {
  ctx.beginPath();
  ctx.arc(0, 0, radius, 0, 2 * Math.PI);
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = 2.5;
  ctx.stroke();
  const { fill, line } = pressInk(press, ink);
  ctx.fillStyle = fill;
  ctx.fill();
  if (press !== 'none') return;
  ctx.strokeStyle = line;
  ctx.lineWidth = 1.2;
  ctx.stroke();
}

/**
 * One mark around the origin. Kind: shape and letter. Press: size, and filled with a second outline
 * (within the hour), filled, pale, hollow (nothing left to save). Foot: on a route. Badge: danger.
 */
export function drawMark(ctx: CanvasRenderingContext2D, look: MarkLook, ink: MapInk): void {
  const radius = MARK_RADIUS[look.press];
  const shape = new Path2D(COMPARTMENT_SHAPES[look.kind]);
  const scale = radius / SHAPE_RADIUS;
  const { fill, line, letter } = pressInk(look.press, ink);
  ctx.lineJoin = 'round';

  if (look.isOnRoute) {
    ctx.fillStyle = ink.ground;
    ctx.fillRect(-radius - 1, radius + 0.5, 2 * radius + 2, 5);
    ctx.fillStyle = ink.ink;
    ctx.fillRect(-radius, radius + 2, 2 * radius, 2.25);
  }
  ctx.save();
  ctx.scale(scale, scale);
  if (look.press === 'now') {
    outline(ctx, shape, ink.ground, (2 * (RIM_PX + 3)) / scale);
    outline(ctx, shape, line, (2 * 3.25) / scale);
    outline(ctx, shape, ink.ground, (2 * 1.5) / scale);
  } else {
    outline(ctx, shape, ink.ground, (2 * RIM_PX) / scale);
  }
  ctx.fillStyle = fill;
  ctx.fill(shape);
  outline(ctx, shape, line, 1.5 / scale);
  ctx.restore();

  ctx.font = font(Math.round(radius * 1.28), 600);
  ctx.textAlign = 'center';
  ctx.textBaseline = 'alphabetic';
  ctx.fillStyle = letter;
  ctx.fillText(COMPARTMENT_WORDS[look.kind].letter, 0, radius * 0.45);
  if (look.hasDanger) drawBadge(ctx, radius, ink);
}

function outline(ctx: CanvasRenderingContext2D, shape: Path2D, color: string, width: number): void {
  ctx.strokeStyle = color;
  ctx.lineWidth = width;
  ctx.stroke(shape);
}

function drawBadge(ctx: CanvasRenderingContext2D, radius: number, ink: MapInk): void {
  const x = radius * 0.85;
  const y = -radius * 0.85;
  const badge = new Path2D(`M${x} ${y - 6}L${x + 6} ${y + 5}H${x - 6}Z`);
  outline(ctx, badge, ink.ground, 3);
  ctx.fillStyle = ink.danger;
  ctx.fill(badge);
  outline(ctx, badge, ink.danger, 1);
  ctx.fillStyle = ink.ground;
  ctx.font = font(9, 600);
  ctx.fillText('!', x, y + 4);
}

function pressInk(
  press: Press,
  ink: MapInk,
): { readonly fill: string; readonly line: string; readonly letter: string } {
  switch (press) {
    case 'now':
    case 'soon':
      return { fill: ink.warn, line: ink.warn, letter: ink.ground };
    case 'later':
      return { fill: ink.safe, line: ink.safe, letter: ink.ground };
    case 'none':
      return { fill: ink.ground, line: ink.lost, letter: ink.lost };
  }
}
