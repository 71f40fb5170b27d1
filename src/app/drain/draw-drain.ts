import type { OutlookDto } from '@shared/contract/forecast';
import type { DrainDto } from '@shared/contract/office';
import type { Instant } from '@shared/domain/instant';
import type { ChartDataset, ChartOptions } from 'chart.js';
import { dayTime, money } from '../core/zone';
import type { Draw } from './chart-canvas';
import { aheadLines, type AheadLines, curve, settledOf, totalsOf } from './drain-curves';
import type { Ink } from './ink';
import { moneyShort } from './money-short';
import { timeTicks } from './time-ticks';

export interface DrainView {
  readonly drain: DrainDto;
  /** IANA name of the region's time zone. */
  readonly zone: string;
  /** Whether the picture is a hand wide. */
  readonly isNarrow: boolean;
  /** Null while it is not known; a closed storm has none. */
  readonly outlook: OutlookDto | null;
}

export type Line = ChartDataset<'line', { x: number; y: number }[]>;

/** Calls that came in, were settled and are open, and where that leads. */
export function drawBacklog({ drain, zone, isNarrow, outlook }: DrainView): Draw {
  return (ink) => {
    const now = totalsOf(drain);
    const ahead = outlook && aheadLines(outlook, drain);
    const far = ahead?.middle.at(-1)?.x ?? drain.at;
    const datasets: Line[] = [
      {
        ...thin(ink.soft, 'triangle', drain),
        data: [...curve(drain, (point) => point.arrivals)],
        label: 'came in',
        endLabel: `came in ${now.arrivals}`,
        endMark: '▲',
      },
      {
        ...thin(ink.safe, 'rect', drain),
        borderDash: [7, 4],
        data: [...curve(drain, settledOf)],
        label: 'settled',
        endLabel: `settled ${settledOf(now)}`,
        endMark: '■',
      },
      {
        ...thin(ink.text, 'circle', drain),
        borderWidth: 3,
        data: [...curve(drain, (point) => point.open)],
        label: 'open',
        endLabel: `open ${now.open}`,
        endMark: '●',
      },
    ];
    if (outlook && ahead) datasets.push(...bandOf(ahead, ink, aheadLabel(outlook, ahead, zone)));
    return {
      type: 'line',
      data: { datasets },
      options: options({
        ink,
        zone,
        from: drain.series[0]?.at ?? drain.at,
        to: far,
        isNarrow,
        roomRight: ahead ? 126 : 104,
        // Room for the words above the ends of what has been.
        ...(ahead ? { least: now.arrivals * 1.4 } : {}),
        value: (amount) => String(Math.round(amount)),
        tick: (amount) => String(amount),
      }),
    };
  };
}

/** What became of the value: saved, at risk and lost on top of each other. */
export function drawValue({ drain, zone, isNarrow }: DrainView): Draw {
  return (ink) => {
    const now = totalsOf(drain);
    const band = (color: string, ground: string | CanvasPattern, from: string) => ({
      borderColor: color,
      backgroundColor: ground,
      borderWidth: 1.5,
      pointRadius: 0,
      pointHitRadius: 12,
      fill: from,
      stack: 'value',
      endLabelAt: 'band' as const,
    });
    return {
      type: 'line',
      data: {
        datasets: [
          {
            ...band(ink.safe, ink.safeGround, 'origin'),
            data: [...curve(drain, (point) => point.savedCents)],
            label: 'saved',
            endLabel: `saved ${moneyShort(now.savedCents)}`,
          },
          {
            ...band(ink.risk, ink.riskGround, '-1'),
            data: [...curve(drain, (point) => point.valueAtRiskCents)],
            label: 'at risk',
            endLabelColor: ink.riskText,
            endLabel: `at risk ${moneyShort(now.valueAtRiskCents)}`,
          },
          {
            ...band(ink.lost, ink.lostGround, '-1'),
            data: [...curve(drain, (point) => point.lostCents)],
            label: 'lost',
            endLabel: `lost ${moneyShort(now.lostCents)}`,
          },
        ],
      },
      options: options({
        ink,
        zone,
        from: drain.series[0]?.at ?? drain.at,
        to: drain.at,
        isNarrow,
        roomRight: 110,
        isStacked: true,
        value: money,
        tick: moneyShort,
      }),
    };
  };
}

/**
 * The middle of the futures as a dotted line, and hatched ground between the edges of four of five of
 * them: edges and hatching tell it without colour.
 */
export function bandOf(lines: AheadLines, ink: Ink, label: string, color = ink.text): Line[] {
  const edge = {
    borderColor: color,
    borderWidth: 1,
    pointRadius: 0,
    pointHitRadius: 12,
  };
  return [
    { ...edge, data: [...lines.low], label: 'open at least, in nine of ten futures' },
    {
      ...edge,
      data: [...lines.high],
      label: 'open at most, in nine of ten futures',
      backgroundColor: ink.aheadGround,
      fill: '-1',
    },
    {
      ...edge,
      data: [...lines.middle],
      borderWidth: 2.5,
      borderDash: [2, 5],
      label: 'open, as likely more as less',
      endLabel: label,
    },
  ];
}

function aheadLabel({ emptyAt }: OutlookDto, { isCut }: AheadLines, zone: string): string {
  if (emptyAt.middle === null) return '→ not empty';
  return `${isCut ? '→ ' : ''}empty ${dayTime(emptyAt.middle, zone)}`;
}

/** About a dozen points a line: enough to tell the lines apart by shape, too few to hide them. */
const POINTS = 12;

function thin(color: string, shape: 'triangle' | 'rect' | 'circle', drain: DrainDto) {
  const every = Math.max(1, Math.round(drain.series.length / POINTS));
  const last = drain.series.length - 1;
  return {
    borderColor: color,
    backgroundColor: color,
    borderWidth: 1.75,
    // A mark that stands on the picture's edge would be cut in half.
    clip: 10,
    pointStyle: shape,
    pointHitRadius: 12,
    pointRadius: ({ dataIndex }: { dataIndex: number }) =>
      dataIndex === last || (last - dataIndex) % every === 0 ? 4 : 0,
  };
}

export interface Axes {
  readonly ink: Ink;
  readonly zone: string;
  readonly from: Instant;
  readonly to: Instant;
  readonly isNarrow: boolean;
  /** Pixels for the words at the line ends. */
  readonly roomRight: number;
  readonly isStacked?: boolean;
  /** The scale reaches up to here at least. */
  readonly least?: number;
  readonly value: (amount: number) => string;
  readonly tick: (amount: number) => string;
}

export function options(axes: Axes): ChartOptions<'line'> {
  const { ink, zone, from, to } = axes;
  const font = { family: "'IBM Plex Sans', sans-serif", size: 12 };
  const ticks = timeTicks(from, to, zone, axes.isNarrow ? 4 : 9);
  const labels = new Map(ticks.map(({ value, label }) => [value, label]));
  return {
    animation: false,
    responsive: true,
    maintainAspectRatio: false,
    interaction: { mode: 'index', intersect: false },
    layout: { padding: { right: axes.roomRight, top: 10 } },
    scales: {
      x: {
        type: 'linear',
        min: from,
        max: Math.max(to, from + 1),
        grid: { color: ink.rule },
        border: { color: ink.soft },
        afterBuildTicks: (axis) => {
          axis.ticks = ticks.map(({ value }) => ({ value }));
        },
        ticks: {
          color: ink.soft,
          font,
          maxRotation: 0,
          autoSkip: false,
          callback: (value) => labels.get(Number(value)) ?? '',
        },
      },
      y: {
        type: 'linear',
        beginAtZero: true,
        ...(axes.least === undefined ? {} : { suggestedMax: axes.least }),
        stacked: axes.isStacked ?? false,
        grid: { color: ink.rule },
        border: { display: false },
        ticks: {
          color: ink.soft,
          font,
          precision: 0,
          maxTicksLimit: 7,
          callback: (value) => axes.tick(Number(value)),
        },
      },
    },
    plugins: {
      tooltip: {
        backgroundColor: ink.raised,
        borderColor: ink.soft,
        borderWidth: 1,
        titleColor: ink.text,
        bodyColor: ink.text,
        titleFont: { ...font, weight: 600 },
        bodyFont: font,
        usePointStyle: true,
        callbacks: {
          title: ([item]) => (item ? dayTime(Number(item.parsed.x), zone) : ''),
          label: ({ dataset, parsed }) => `${axes.value(Number(parsed.y))} ${dataset.label ?? ''}`,
        },
      },
    },
  };
}
