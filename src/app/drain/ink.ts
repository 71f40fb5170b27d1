import type { Theme } from '../core/theme';

/** What a chart is drawn with: the page's colours, and grounds that differ also without colour. */
export interface Ink {
  readonly text: string;
  readonly soft: string;
  readonly rule: string;
  readonly ground: string;
  readonly raised: string;
  readonly safe: string;
  readonly risk: string;
  /** At risk, as words: a mark's colour is too faint for them. */
  readonly riskText: string;
  readonly lost: string;
  /** As the cold strip: even while safe, hatched at risk, dotted when lost. */
  readonly safeGround: CanvasPattern | string;
  readonly riskGround: CanvasPattern | string;
  readonly lostGround: CanvasPattern | string;
  /** What lies ahead and is not sure: upright hatching, which no state of contents has. */
  readonly aheadGround: CanvasPattern | string;
}

export function inkOf(theme: Pick<Theme, 'color'>, context: CanvasRenderingContext2D): Ink {
  const safe = theme.color('--thaw-safe');
  const risk = theme.color('--thaw-warn-mark');
  const lost = theme.color('--thaw-lost');
  return {
    text: theme.color('--thaw-ink'),
    soft: theme.color('--thaw-ink-soft'),
    rule: theme.color('--thaw-rule'),
    ground: theme.color('--thaw-ground'),
    raised: theme.color('--thaw-raised'),
    safe,
    risk,
    riskText: theme.color('--thaw-warn'),
    lost,
    safeGround: tile(context, 4, (pen) => {
      pen.globalAlpha = 0.35;
      pen.fillStyle = safe;
      pen.fillRect(0, 0, 4, 4);
    }),
    riskGround: tile(context, 7, (pen) => {
      pen.globalAlpha = 0.75;
      pen.strokeStyle = risk;
      pen.lineWidth = 1.6;
      pen.beginPath();
      for (const shift of [-7, 0, 7]) {
        pen.moveTo(shift, 7);
        pen.lineTo(shift + 7, 0);
      }
      pen.stroke();
    }),
    aheadGround: tile(context, 6, (pen) => {
      pen.globalAlpha = 0.4;
      pen.strokeStyle = theme.color('--thaw-ink-soft');
      pen.lineWidth = 1;
      pen.beginPath();
      pen.moveTo(3, 0);
      pen.lineTo(3, 6);
      pen.stroke();
    }),
    lostGround: tile(context, 6, (pen) => {
      pen.globalAlpha = 0.8;
      pen.fillStyle = lost;
      pen.fillRect(1, 1, 1.8, 1.8);
      pen.fillRect(4, 4, 1.8, 1.8);
    }),
  };
}

function tile(
  context: CanvasRenderingContext2D,
  size: number,
  paint: (pen: CanvasRenderingContext2D) => void,
): CanvasPattern | string {
  const scale = context.canvas.ownerDocument.defaultView?.devicePixelRatio ?? 1;
  const canvas = context.canvas.ownerDocument.createElement('canvas');
  canvas.width = canvas.height = Math.round(size * scale);
  const pen = canvas.getContext('2d');
  if (!pen) return 'transparent';
  pen.scale(canvas.width / size, canvas.height / size);
  paint(pen);
  const pattern = context.createPattern(canvas, 'repeat');
  if (!pattern) return 'transparent';
  pattern.setTransform(new DOMMatrix().scale(1 / scale));
  return pattern;
}
