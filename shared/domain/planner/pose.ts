import type { PlanDeadline, PlanWeights } from './problem';

/**
 * How the board's wishes become a planning problem: one place for the prices and margins that are no
 * rules of the trade but ways to make a good plan of what is not known for certain. Each was tried on
 * made-up storms (`npm run simulate`); the figures are in DEVELOPERS.md.
 */
export interface Posing {
  /** How much more a dollar of medicine counts than a dollar of food. */
  readonly medicineFactor: number;
  /** Parts of a value that count as lost so many seconds after its true deadline (before it, if negative). */
  readonly deadlineSpread: readonly SpreadPart[];
  /** The same for medicine: visits before it may take longer than thought, so it is aimed at earlier. */
  readonly medicineSpread: readonly SpreadPart[];
  /** Seconds before a promised window's end at which a start counts as late. */
  readonly windowMargin: number;
  /** What keeping a promise is worth, in money; so also what it costs to go to nobody there at all. */
  readonly promiseValue: number;
  /** A new plan has to be better by this price and this share before it takes the place of the old. */
  readonly leastGain: number;
  readonly leastGainShare: number;
  readonly weights: Partial<PlanWeights>;
}

export interface SpreadPart {
  readonly seconds: number;
  readonly share: number;
}

export const POSING: Posing = {
  medicineFactor: 20,
  deadlineSpread: [
    { seconds: -20 * 60, share: 0.3 },
    { seconds: 0, share: 0.7 },
  ],
  medicineSpread: [
    { seconds: -120 * 60, share: 0.1 },
    { seconds: -60 * 60, share: 0.2 },
    { seconds: -20 * 60, share: 0.3 },
    { seconds: 0, share: 0.4 },
  ],
  windowMargin: 20 * 60,
  promiseValue: 400,
  leastGain: 5,
  leastGainShare: 0.002,
  weights: { churnReassign: 40, churnMoved: 20 },
};

/** The deadlines of one value at stake. */
export function posedDeadlines(
  stake: PlanDeadline & { readonly isMedicine: boolean },
  { deadlineSpread, medicineSpread, medicineFactor }: Posing = POSING,
): PlanDeadline[] {
  const value = stake.value * (stake.isMedicine ? medicineFactor : 1);
  return (stake.isMedicine ? medicineSpread : deadlineSpread).map(({ seconds, share }) => ({
    at: stake.at + seconds,
    value: value * share,
  }));
}

/** The price of a promise that is not kept, as deadlines. */
export function posedPromise(
  [, to]: readonly [from: number, to: number],
  { promiseValue, windowMargin }: Posing = POSING,
): PlanDeadline[] {
  return promiseValue > 0
    ? [
        { at: to - windowMargin, value: promiseValue / 2 },
        { at: to, value: promiseValue / 2 },
      ]
    : [];
}

/** A promised window as the planner should keep it. */
export function posedWindow(
  [from, to]: readonly [from: number, to: number],
  { windowMargin }: Posing = POSING,
): readonly [from: number, to: number] {
  return [from, Math.max(from, to - windowMargin)];
}

/** Whether a better plan is worth the trouble of changing the one that people know. */
export function isWorthChanging(
  costInForce: number,
  costFound: number,
  { leastGain, leastGainShare }: Posing = POSING,
): boolean {
  return costFound < costInForce - Math.max(leastGain, leastGainShare * costInForce);
}
