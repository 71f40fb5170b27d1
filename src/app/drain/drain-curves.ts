import type { OutlookDto } from '@shared/contract/forecast';
import type { DrainDto } from '@shared/contract/office';
import { HOUR_MS, type Instant } from '@shared/domain/instant';

export interface Spot {
  readonly x: Instant;
  readonly y: number;
}

export type DrainPoint = DrainDto['series'][number];

const NO_POINT: DrainPoint = {
  at: 0,
  arrivals: 0,
  settledByPhone: 0,
  settledByVisit: 0,
  open: 0,
  valueAtRiskCents: 0,
  savedCents: 0,
  lostCents: 0,
};

/** The totals as of the drain's own moment. */
export const totalsOf = ({ series }: DrainDto): DrainPoint => series.at(-1) ?? NO_POINT;

export const settledOf = (point: DrainPoint): number => point.settledByPhone + point.settledByVisit;

export const curve = (
  { series }: DrainDto,
  value: (point: DrainPoint) => number,
): readonly Spot[] => series.map((point) => ({ x: point.at, y: value(point) }));

/** How far the picture looks ahead at least, and how much longer than it looks back at most. */
const LEAST_AHEAD_MS = 12 * HOUR_MS;
const AHEAD_OF_BACK = 3;

/** The three lines of an outlook: what is open in the middle, and what four of five futures lie between. */
export interface AheadLines {
  readonly low: readonly Spot[];
  readonly middle: readonly Spot[];
  readonly high: readonly Spot[];
  /** The lines end before the backlog does, because the picture is not that long. */
  readonly isCut: boolean;
}

/** A far empty time is cut off, so that the past keeps its part of the picture. */
export function aheadLines({ curve }: OutlookDto, drain: DrainDto): AheadLines {
  const back = drain.at - (drain.series[0]?.at ?? drain.at);
  const most = drain.at + Math.max(LEAST_AHEAD_MS, back * AHEAD_OF_BACK);
  const shown = curve.filter(({ at }) => at <= most);
  const line = (key: 'low' | 'middle' | 'high') =>
    shown.map(({ at, open }) => ({ x: at, y: open[key] }));
  return {
    low: line('low'),
    middle: line('middle'),
    high: line('high'),
    isCut: shown.length < curve.length,
  };
}
