/** A small canvas out of sight, for pictures that are drawn once and copied; pages and threads have it alike. */
export function scratchCanvas(sidePx: number): {
  readonly canvas: OffscreenCanvas;
  readonly pen: CanvasRenderingContext2D;
} {
  const canvas = new OffscreenCanvas(sidePx, sidePx);
  return { canvas, pen: penOf(canvas) };
}

/** What is drawn here uses what both kinds of context have. */
export function penOf(
  canvas: OffscreenCanvas,
  settings?: CanvasRenderingContext2DSettings,
): CanvasRenderingContext2D {
  const pen = canvas.getContext('2d', settings);
  if (!pen) throw new Error('No canvas can be drawn on.');
  return pen as unknown as CanvasRenderingContext2D;
}
