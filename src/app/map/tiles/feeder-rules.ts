import { linear, LineSymbolizer, type Feature, type PaintRule } from 'protomaps-leaflet';
import type { Palette } from './palette';
import { isKind } from './rule-filters';

/** Power lines, thin and broken as they are on paper maps; substations as small squares. */
export function feederRules({ feeder, halo }: Palette): PaintRule[] {
  return [
    {
      dataLayer: 'power',
      minzoom: 11,
      filter: isKind('line'),
      symbolizer: new LineSymbolizer({
        color: feeder,
        width: linear([
          [11, 0.8],
          [16, 1.8],
        ]),
        opacity: 0.8,
        dash: [7, 2.5, 1.5, 2.5],
      }),
    },
    {
      dataLayer: 'power',
      minzoom: 13,
      filter: isKind('minor_line', 'cable'),
      symbolizer: new LineSymbolizer({
        color: feeder,
        width: linear([
          [13, 0.5],
          [17, 1.3],
        ]),
        opacity: 0.8,
        dash: [3, 2],
      }),
    },
    {
      dataLayer: 'power',
      minzoom: 11,
      filter: isKind('substation'),
      symbolizer: { draw: (ctx, geom, zoom) => drawSubstation(ctx, geom, zoom, feeder, halo) },
    },
  ];
}

function drawSubstation(
  ctx: CanvasRenderingContext2D,
  geom: Feature['geom'],
  zoom: number,
  ink: string,
  paper: string,
): void {
  const half = zoom < 13 ? 2.5 : zoom < 15 ? 4 : 5.5;
  for (const { x, y } of geom.flat()) {
    ctx.fillStyle = paper;
    ctx.fillRect(x - half - 1.5, y - half - 1.5, 2 * half + 3, 2 * half + 3);
    ctx.strokeStyle = ink;
    ctx.lineWidth = 1.25;
    ctx.strokeRect(x - half, y - half, 2 * half, 2 * half);
    ctx.fillStyle = ink;
    ctx.fillRect(x - half / 2, y - half / 2, half, half);
  }
}
