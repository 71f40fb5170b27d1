import type { DrainDto } from '@shared/contract/office';
import { HOUR_MS, type Instant } from '@shared/domain/instant';

export interface Spot {
  readonly x: Instant;
  readonly y: number;
}

/** Where the backlog goes if the rates of the last while go on. */
export interface Forecast {
  /** `empties`: it reaches nothing. `grows`: at these rates it never will. `is-empty`: nothing is open. */
  readonly kind: 'empties' | 'grows' | 'stands' | 'is-empty';
  /** From now on; empty when there is nothing to draw. */
  readonly line: readonly Spot[];
  /** The line ends before the backlog does, because the picture is not that long. */
  readonly isCut: boolean;
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
const LEAST_AHEAD_MS = 6 * HOUR_MS;
const AHEAD_OF_BACK = 1;
/** A growing backlog is drawn this far only: long enough to see that it grows. */
const GROWTH_MS = 3 * HOUR_MS;

/**
 * The straight line from what is open now to the forecast empty time. A far empty time is cut off, so
 * that the past keeps its half of the picture.
 */
export function forecastOf(drain: DrainDto): Forecast {
  const { open } = totalsOf(drain);
  const { emptyAt, arrivalsPerHour, settledPerHour } = drain.forecast;
  const from: Spot = { x: drain.at, y: open };
  if (open === 0) return { kind: 'is-empty', line: [], isCut: false };

  if (emptyAt === null || emptyAt <= drain.at) {
    const growth = arrivalsPerHour - settledPerHour;
    if (growth <= 0) return { kind: 'stands', line: [], isCut: false };
    const to = { x: drain.at + GROWTH_MS, y: open + (growth * GROWTH_MS) / HOUR_MS };
    return { kind: 'grows', line: [from, to], isCut: true };
  }

  const back = drain.at - (drain.series[0]?.at ?? drain.at);
  const ahead = Math.max(LEAST_AHEAD_MS, back * AHEAD_OF_BACK);
  const length = emptyAt - drain.at;
  if (length <= ahead) {
    return { kind: 'empties', line: [from, { x: emptyAt, y: 0 }], isCut: false };
  }
  const end = { x: drain.at + ahead, y: open * (1 - ahead / length) };
  return { kind: 'empties', line: [from, end], isCut: true };
}
