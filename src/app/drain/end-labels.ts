import type { Chart, ChartDataset, Plugin } from 'chart.js';

declare module 'chart.js' {
  interface LineControllerDatasetOptions {
    /** What stands at the end of the line instead of a legend. */
    endLabel?: string;
    /** `band`: in the middle of the ground between this line and the one below. */
    endLabelAt?: 'line' | 'band';
    /** When the line's own colour is too faint for words. */
    endLabelColor?: string;
  }
}

interface Label {
  readonly text: string;
  readonly color: string;
  readonly x: number;
  y: number;
}

const LINE_PX = 17;
const GAP_PX = 9;

/** Writes each line's name and last value beside its end, so that no legend has to be matched. */
export const endLabels: Plugin<'line'> = {
  id: 'endLabels',
  afterDatasetsDraw(chart) {
    const labels = spread(labelsOf(chart), chart.chartArea.top, chart.chartArea.bottom);
    const { ctx } = chart;
    const ground = String(
      chart.canvas.ownerDocument.defaultView
        ?.getComputedStyle(chart.canvas)
        .getPropertyValue('--thaw-ground') ?? '',
    );
    ctx.save();
    ctx.font = `500 13px 'IBM Plex Sans', sans-serif`;
    ctx.textBaseline = 'middle';
    ctx.lineJoin = 'round';
    for (const { text, color, x, y } of labels) {
      const left = Math.min(x, chart.width - ctx.measureText(text).width - 2);
      // A halo of the ground keeps the words readable where a line runs behind them.
      ctx.lineWidth = 5;
      ctx.strokeStyle = ground;
      ctx.strokeText(text, left, y);
      ctx.fillStyle = color;
      ctx.fillText(text, left, y);
    }
    ctx.restore();
  },
};

function labelsOf(chart: Chart): Label[] {
  return chart.data.datasets.flatMap((dataset, index) => {
    const { endLabel, endLabelAt, endLabelColor, borderColor } = dataset as ChartDataset<'line'>;
    const meta = chart.getDatasetMeta(index);
    const end = meta.data.at(-1);
    if (!endLabel || !end || meta.hidden) return [];
    const below = index > 0 ? chart.getDatasetMeta(index - 1).data.at(-1)?.y : undefined;
    const y = endLabelAt === 'band' ? (end.y + (below ?? chart.chartArea.bottom)) / 2 : end.y;
    return [
      {
        text: endLabel,
        color: endLabelColor ?? (typeof borderColor === 'string' ? borderColor : 'gray'),
        x: end.x + GAP_PX,
        y,
      },
    ];
  });
}

/** Moves labels that would cover each other apart, each as little as its neighbours let it. */
export function spread<L extends { readonly x: number; y: number }>(
  labels: readonly L[],
  top: number,
  bottom: number,
): L[] {
  const placed = labels.map((label) => ({ ...label })).sort((a, b) => a.y - b.y);
  for (const label of placed) label.y = Math.max(label.y, top + LINE_PX / 2);
  for (let i = 1; i < placed.length; i++) {
    const above = placed[i - 1]!;
    const label = placed[i]!;
    label.y = Math.max(label.y, above.y + LINE_PX);
  }
  let floor = bottom - LINE_PX / 2;
  for (let i = placed.length - 1; i >= 0; i--) {
    const label = placed[i]!;
    label.y = Math.min(label.y, floor);
    floor = label.y - LINE_PX;
  }
  return placed;
}
