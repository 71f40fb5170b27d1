import type { Feature, PaintRule } from 'protomaps-leaflet';

type PaintSymbolizer = PaintRule['symbolizer'];
type Geometry = Feature['geom'];
type Corner = Geometry[number][number];

/** How far the rails stand apart from the street on the bridge, and how wide they are. */
const RAIL_GAP_PX = 0.75;
const RAIL_PX = 1.25;
/** The rails open towards the banks. */
const WING_PX = 4;

/** A bridge: the street between two rails, which open at either end. */
export class BridgeSymbolizer implements PaintSymbolizer {
  constructor(
    private readonly rail: string,
    private readonly street: string,
    private readonly width: (zoom: number) => number,
  ) {}

  draw(ctx: CanvasRenderingContext2D, geom: Geometry, zoom: number): void {
    const width = this.width(zoom);
    const across = width / 2 + RAIL_GAP_PX + RAIL_PX / 2;
    for (const line of geom) {
      if (line.length < 2) continue;
      ctx.lineJoin = 'round';
      ctx.lineCap = 'butt';
      ctx.strokeStyle = this.rail;
      ctx.lineWidth = 2 * across + RAIL_PX;
      trace(ctx, line);
      ctx.stroke();
      ctx.lineWidth = RAIL_PX;
      wing(ctx, line[0], line[1], across);
      wing(ctx, line.at(-1), line.at(-2), across);
      ctx.lineCap = 'round';
      ctx.strokeStyle = this.street;
      ctx.lineWidth = width + 2 * RAIL_GAP_PX;
      trace(ctx, line);
      ctx.stroke();
    }
  }
}

function trace(ctx: CanvasRenderingContext2D, line: readonly Corner[]): void {
  ctx.beginPath();
  line.forEach(({ x, y }, i) => (i === 0 ? ctx.moveTo(x, y) : ctx.lineTo(x, y)));
}

function wing(
  ctx: CanvasRenderingContext2D,
  end: Corner | undefined,
  before: Corner | undefined,
  across: number,
): void {
  if (!end || !before) return;
  const angle = Math.atan2(end.y - before.y, end.x - before.x);
  const [dx, dy] = [Math.cos(angle), Math.sin(angle)];
  for (const side of [-1, 1]) {
    const x = end.x - side * dy * across;
    const y = end.y + side * dx * across;
    ctx.beginPath();
    ctx.moveTo(x, y);
    ctx.lineTo(x + WING_PX * (dx - side * dy), y + WING_PX * (dy + side * dx));
    ctx.stroke();
  }
}
