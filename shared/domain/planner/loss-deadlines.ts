import type { CompartmentKind } from '../cold-unit';
import type { Instant } from '../instant';
import type { PosedStake } from './pose';

/** What the planner has to know of a compartment. */
export interface CompartmentAtStake {
  readonly kind: CompartmentKind;
  readonly valueCents: number;
  readonly earliestAt: Instant;
  /** Both `null` where no rule may call the contents lost; then no moment is due. */
  readonly likelyAt: Instant | null;
  readonly saveByAt: Instant | null;
}

export interface LossWeights {
  /** How much more medicine counts than food of the same price. */
  readonly medicine: number;
  /** How much more everything counts in a household that can do less without. */
  readonly household: number;
}

export interface DeadlineSetting {
  readonly now: Instant;
  /** Seconds of work at the door: cooling runs again only after them. */
  readonly serviceSeconds: number;
  readonly weights: LossWeights;
  readonly householdAtRisk: boolean;
}

/**
 * What share of a value is counted lost at the earliest, the likely and the latest moment: our
 * estimate. Half stays for the published limit, until which nobody may call the contents lost.
 */
const SHARES = { earliest: 0.15, likely: 0.35, latest: 0.5 } as const;

/**
 * When the work on a call has to begin, and what is lost by beginning later: dollars, weighed. What
 * has come to its save-by is at no stake, and what has none is lost at no moment.
 */
export const lossStakes = (
  compartments: readonly CompartmentAtStake[],
  setting: DeadlineSetting,
): PosedStake[] => compartments.flatMap((one) => stakesOf(one, setting));

/** The planner counts in seconds, and a start at a deadline still keeps it: so strictly before the moment. */
export const latestStart = (doneBefore: Instant, serviceSeconds: number): number =>
  Math.floor((doneBefore - 1) / 1000) - serviceSeconds;

function stakesOf(
  { kind, valueCents, earliestAt, likelyAt, saveByAt }: CompartmentAtStake,
  { now, serviceSeconds, weights, householdAtRisk }: DeadlineSetting,
): PosedStake[] {
  if (saveByAt !== null && saveByAt <= now) return [];
  const isMedicine = kind === 'medicine';
  const value =
    (valueCents / 100) *
    (isMedicine ? weights.medicine : 1) *
    (householdAtRisk ? weights.household : 1);
  if (saveByAt === null) return [{ value, isMedicine, moments: [] }];
  const moment = (at: Instant, share: number) => ({ at: latestStart(at, serviceSeconds), share });
  return [
    {
      value,
      isMedicine,
      moments: [
        moment(earliestAt, SHARES.earliest),
        moment(likelyAt ?? saveByAt, SHARES.likely),
        moment(saveByAt, SHARES.latest),
      ],
    },
  ];
}
