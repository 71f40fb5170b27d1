import type { DrainDto } from '@shared/contract/office';
import type { Instant } from '@shared/domain/instant';
import type { ChartDataset, ChartOptions } from 'chart.js';
import { dayTime, money } from '../core/zone';
import type { Draw } from './chart-canvas';
import { curve, type Forecast, forecastOf, settledOf, totalsOf } from './drain-curves';
import type { Ink } from './ink';
import { moneyShort } from './money-short';
import { timeTicks } from './time-ticks';

export interface DrainView {
  readonly drain: DrainDto;
  /** IANA name of the region's time zone. */
  readonly zone: string;
  /** Whether the picture is a hand wide. */
  readonly isNarrow: boolean;
  /** A closed storm has no forecast. */
  readonly isOver: boolean;
}

const NO_FORECAST: Forecast = { kind: 'stands', line: [], isCut: false };

type Line = ChartDataset<'line', { x: number; y: number }[]>;

/** Calls that came in, were settled and are open, and where that leads. */
export function drawBacklog({ drain, zone, isNarrow, isOver }: DrainView): Draw {
  return (ink) => {
    const now = totalsOf(drain);
    const forecast = isOver ? NO_FORECAST : forecastOf(drain);
    const far = forecast.line.at(-1)?.x ?? drain.at;
    const datasets: Line[] = [
      {
        ...thin(ink.soft, 'triangle', drain),
        data: [...curve(drain, (point) => point.arrivals)],
        label: 'came in',
        endLabel: `came in ${now.arrivals}`,
      },
      {
        ...thin(ink.safe, 'rect', drain),
        borderDash: [7, 4],
        data: [...curve(drain, settledOf)],
        label: 'settled',
        endLabel: `settled ${settledOf(now)}`,
      },
      {
        ...thin(ink.text, 'circle', drain),
        borderWidth: 3,
        data: [...curve(drain, (point) => point.open)],
        label: 'open',
        endLabel: `open ${now.open}`,
      },
    ];
    if (forecast.line.length > 0) {
      datasets.push({
        ...thin(ink.text, 'crossRot', drain),
        borderWidth: 2,
        borderDash: [2, 5],
        pointRadius: forecast.isCut ? 0 : [0, 6],
        pointBorderWidth: 2,
        data: [...forecast.line],
        label: 'forecast',
        endLabel: forecastLabel(drain, zone),
      });
    }
    return {
      type: 'line',
      data: { datasets },
      options: options({
        ink,
        zone,
        from: drain.series[0]?.at ?? drain.at,
        to: far,
        isNarrow,
        roomRight: forecast.kind === 'empties' ? 126 : 104,
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

function forecastLabel(drain: DrainDto, zone: string): string {
  const { kind, isCut } = forecastOf(drain);
  if (kind === 'grows') return 'growing';
  const { emptyAt } = drain.forecast;
  if (emptyAt === null) return '';
  return `${isCut ? '→ ' : ''}empty ${dayTime(emptyAt, zone)}`;
}

/** About a dozen points a line: enough to tell the lines apart by shape, too few to hide them. */
const POINTS = 12;

function thin(color: string, shape: 'triangle' | 'rect' | 'circle' | 'crossRot', drain: DrainDto) {
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

interface Axes {
  readonly ink: Ink;
  readonly zone: string;
  readonly from: Instant;
  readonly to: Instant;
  readonly isNarrow: boolean;
  /** Pixels for the words at the line ends. */
  readonly roomRight: number;
  readonly isStacked?: boolean;
  readonly value: (amount: number) => string;
  readonly tick: (amount: number) => string;
}

function options(axes: Axes): ChartOptions<'line'> {
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
