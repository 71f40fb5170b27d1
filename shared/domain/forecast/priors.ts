import { hoursBetween } from '../instant';
import type { Draws } from './draws';
import type { DurationPrior } from './durations';
import type { ForecastFacts } from './facts';

/**
 * What a forecast takes for granted before the storm has shown anything. All of it is our estimate
 * without a source, wide on purpose; `npm run bench forecast` says how well the bands hold.
 */
export const PRIORS = {
  handle: { meanMinutes: 9, spread: 0.6, worth: 3 },
  service: ({ usualServiceMinutes }: ForecastFacts['visits']): DurationPrior => ({
    meanMinutes: usualServiceMinutes,
    spread: 0.5,
    worth: 4,
  }),
  drive: ({ usualDriveMinutes }: ForecastFacts['visits']): DurationPrior => ({
    meanMinutes: usualDriveMinutes,
    spread: 0.6,
    worth: 3,
  }),
  /** Of ten calls, three are settled by phone. */
  byPhone: [3, 7],
  /** Of those, three of four run again. */
  running: [3, 1],
  /** One visit in twenty finds nobody at home. */
  nobodyHome: [1, 19],
  /** Nine of ten repairs bring the cooling back. */
  repaired: [9, 1],
  /** Where nobody counts the vans' parts: one visit in twelve orders one. */
  ordered: [1, 11],
  /** The chances that the phone check gives to parts, times this, are what visits need. */
  partScale: [8, 3],
  /** One call in a hundred ends by itself in each hour of waiting. */
  endingPerHour: [0.5, 50],
  /** Medians in hours and the spreads of their logarithms: ordered parts, and finding somebody at home. */
  partsHours: [24, 0.5],
  homeHours: [10, 0.5],
  /** How the waits of single calls spread about that. */
  parkedSpread: 0.6,
  /** How far all areas together may stray from the pattern in which households ring, as a spread. */
  ringStray: 0.3,
  /** How far all drives and visits to come may stray from those measured, as a spread. */
  workStray: 0.05,
  /** How far the order of visits strays from urgency, least and most, as a spread of its logarithm. */
  pullSpread: [0.6, 2.4],
  /** How long an area stays out: as if this many had come back after so many hours each. */
  out: [1.5, 12],
  /** How far the time that a utility has named may be off, as a spread of the logarithm of what is left. */
  toldSpread: 0.35,
} as const satisfies Record<string, unknown>;

/** One draw of the shares and means that a storm has, given what it has shown. */
export interface Shares {
  readonly byPhone: number;
  readonly running: number;
  readonly nobodyHome: number;
  readonly repaired: number;
  readonly ordered: number;
  readonly partScale: number;
  readonly endingPerHour: number;
  readonly partsHours: number;
  readonly homeHours: number;
  readonly outHours: number;
  readonly pullSpread: number;
  /** Multiplies drives and visits. */
  readonly work: number;
}

export function drawShares(
  { phone, visits, waiting, areas, now }: ForecastFacts,
  draws: Draws,
): Shares {
  const share = ([a, b]: readonly [number, number], yes: number, no: number): number =>
    draws.beta(a + yes, b + no);
  const hours = ([mean, spread]: readonly [number, number]): number =>
    mean * Math.exp(spread * draws.normal());
  const done = visits.restored + visits.settledOtherwise;
  const back = areas.filter(({ backAt }) => backAt !== null && backAt <= now).length;
  const out = areas.reduce(
    (sum, { outAt, backAt }) =>
      sum + Math.max(0, hoursBetween(outAt, Math.min(backAt ?? now, now))),
    0,
  );
  return {
    byPhone: share(PRIORS.byPhone, phone.settledRunning + phone.settledOtherwise, phone.toVisit),
    running: share(PRIORS.running, phone.settledRunning, phone.settledOtherwise),
    nobodyHome: share(PRIORS.nobodyHome, visits.noAccess, done + visits.partsOnOrder),
    repaired: share(PRIORS.repaired, visits.restored, visits.settledOtherwise),
    ordered: share(PRIORS.ordered, visits.partsOnOrder, done),
    partScale: share(PRIORS.partScale, 0, 0),
    endingPerHour: draws.gamma(
      PRIORS.endingPerHour[0] + waiting.ended,
      PRIORS.endingPerHour[1] + waiting.hours,
    ),
    partsHours: hours(PRIORS.partsHours),
    homeHours: hours(PRIORS.homeHours),
    work: Math.exp(PRIORS.workStray * draws.normal()),
    pullSpread: PRIORS.pullSpread[0] + draws.unit() * (PRIORS.pullSpread[1] - PRIORS.pullSpread[0]),
    outHours: 1 / draws.gamma(PRIORS.out[0] + back, PRIORS.out[0] * PRIORS.out[1] + out),
  };
}
