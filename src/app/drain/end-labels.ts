import type { Chart, ChartDataset, Plugin } from 'chart.js';

declare module 'chart.js' {
  interface LineControllerDatasetOptions {
    /** What stands at the end of the line instead of a legend. */
    endLabel?: string;
    /** `band`: in the middle of the ground between this line and the one below. */
    endLabelAt?: 'line' | 'band';
    /** The line's marks as a sign, for a label that does not stand beside its end. */
    endMark?: string;
    /** When the line's own colour is too faint for words. */
    endLabelColor?: string;
  }
}

interface Label {
  readonly text: string;
  readonly color: string;
  readonly x: number;
  y: number;
  /** The line ends within the picture: what lies ahead is drawn where its label would stand. */
  readonly isInside: boolean;
}

const LINE_PX = 17;
const GAP_PX = 9;
/** A line that ends so far from the picture's edge has no room of its own beside its end. */
const EDGE_PX = 24;

/** Writes each line's name and last value beside its end, so that no legend has to be matched. */
export const endLabels: Plugin<'line'> = {
  id: 'endLabels',
  afterDatasetsDraw(chart) {
    const { ctx, chartArea } = chart;
    const all = labelsOf(chart);
    const labels = [
      ...spread(
        all.filter(({ isInside }) => !isInside),
        chartArea.top,
        chartArea.bottom,
      ),
      ...stacked(
        all.filter(({ isInside }) => isInside),
        chartArea.top,
      ),
    ];
    const ground = String(
      chart.canvas.ownerDocument.defaultView
        ?.getComputedStyle(chart.canvas)
        .getPropertyValue('--thaw-ground') ?? '',
    );
    ctx.save();
    ctx.font = `500 13px 'IBM Plex Sans', sans-serif`;
    ctx.textBaseline = 'middle';
    ctx.lineJoin = 'round';
    for (const { text, color, x, y, isInside } of labels) {
      const width = ctx.measureText(text).width;
      const left = isInside
        ? Math.max(x - width, chartArea.left + 4)
        : Math.min(x, chart.width - width - 2);
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
    const { endLabel, endLabelAt, endLabelColor, endMark, borderColor } =
      dataset as ChartDataset<'line'>;
    const meta = chart.getDatasetMeta(index);
    const end = meta.data.at(-1);
    if (!endLabel || !end || meta.hidden) return [];
    const below = index > 0 ? chart.getDatasetMeta(index - 1).data.at(-1)?.y : undefined;
    const y = endLabelAt === 'band' ? (end.y + (below ?? chart.chartArea.bottom)) / 2 : end.y;
    const isInside = end.x < chart.chartArea.right - EDGE_PX;
    return [
      {
        text: isInside && endMark ? `${endMark} ${endLabel}` : endLabel,
        color: endLabelColor ?? (typeof borderColor === 'string' ? borderColor : 'gray'),
        x: isInside ? end.x + 4 : end.x + GAP_PX,
        y,
        isInside,
      },
    ];
  });
}

/** Labels of lines that end within the picture, in the lines' order above the topmost end. */
export function stacked<L extends { readonly x: number; y: number }>(
  labels: readonly L[],
  top: number,
): L[] {
  const placed = labels.map((label) => ({ ...label })).sort((a, b) => a.y - b.y);
  const first = placed[0];
  if (!first) return [];
  const height = LINE_PX * placed.length;
  let y = Math.max(first.y - 4 - height, top) + LINE_PX / 2;
  for (const label of placed) {
    label.y = y;
    y += LINE_PX;
  }
  return placed;
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
