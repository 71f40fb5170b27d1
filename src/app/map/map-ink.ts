import type { Theme } from '../core/theme';

/** The page's colours as a canvas needs them: read once, and again when the theme changes. */
export interface MapInk {
  readonly ground: string;
  readonly raised: string;
  readonly ink: string;
  readonly inkSoft: string;
  readonly ruleStrong: string;
  readonly accent: string;
  readonly onAccent: string;
  readonly safe: string;
  readonly warn: string;
  readonly lost: string;
  readonly danger: string;
}

export const readInk = (theme: Theme): MapInk => ({
  ground: theme.color('--thaw-ground'),
  raised: theme.color('--thaw-raised'),
  ink: theme.color('--thaw-ink'),
  inkSoft: theme.color('--thaw-ink-soft'),
  ruleStrong: theme.color('--thaw-rule-strong'),
  accent: theme.color('--thaw-accent'),
  onAccent: theme.color('--thaw-on-accent'),
  safe: theme.color('--thaw-safe'),
  warn: theme.color('--thaw-warn'),
  lost: theme.color('--thaw-lost'),
  danger: theme.color('--thaw-danger'),
});

export const font = (px: number, weight: 400 | 500 | 600 = 400): string =>
  `${weight} ${px}px "IBM Plex Sans", sans-serif`;

/** Text with a rim of the ground's colour, so that it is read on any tile. */
export function inkText(
  ctx: CanvasRenderingContext2D,
  text: string,
  x: number,
  y: number,
  fill: string,
  rim: string,
): void {
  ctx.lineJoin = 'round';
  ctx.lineWidth = 3;
  ctx.strokeStyle = rim;
  ctx.strokeText(text, x, y);
  ctx.fillStyle = fill;
  ctx.fillText(text, x, y);
}
