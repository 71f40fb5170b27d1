import type { CompartmentKind } from '../cold-unit';
import type { Instant } from '../instant';
import type { PlanDeadline } from './problem';

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

/** The planner looks at this many moments of a call. */
export const MOST_DEADLINES = 4;

/**
 * What share of a value is counted lost at the earliest, the likely and the latest moment: our
 * estimate. Half stays for the published limit, until which nobody may call the contents lost.
 */
const SHARES = { earliest: 0.15, likely: 0.35, latest: 0.5 } as const;

/**
 * When the work on a call has to begin, and what is lost by beginning later: dollars, weighed. What
 * has come to its save-by, or has none, is in no deadline. A share whose moment has passed counts at the
 * next moment of the same contents, since until its limit all of it can still be saved.
 *
 * Of more than four moments the closest are joined at the earlier one; the last stays as it is, so
 * that a call which still has something to save says so.
 *
 * @returns in order; the values add up to those of everything that can still be saved
 */
export function lossDeadlines(
  compartments: readonly CompartmentAtStake[],
  setting: DeadlineSetting,
): PlanDeadline[] {
  const all = compartments.flatMap((one) => deadlinesOf(one, setting));
  return joined(all.sort((a, b) => a.at - b.at));
}

/** The planner counts in seconds, and a start at a deadline still keeps it: so strictly before the moment. */
export const latestStart = (doneBefore: Instant, serviceSeconds: number): number =>
  Math.floor((doneBefore - 1) / 1000) - serviceSeconds;

function deadlinesOf(
  { kind, valueCents, earliestAt, likelyAt, saveByAt }: CompartmentAtStake,
  { now, serviceSeconds, weights, householdAtRisk }: DeadlineSetting,
): PlanDeadline[] {
  if (saveByAt === null || saveByAt <= now) return [];
  const dollars =
    (valueCents / 100) *
    (kind === 'medicine' ? weights.medicine : 1) *
    (householdAtRisk ? weights.household : 1);
  const deadlines: PlanDeadline[] = [];
  let passed = 0;
  for (const [moment, share] of [
    [earliestAt, SHARES.earliest],
    [likelyAt ?? saveByAt, SHARES.likely],
    [saveByAt, SHARES.latest],
  ] as const) {
    const at = latestStart(moment, serviceSeconds);
    const isOver = moment < saveByAt && at < now / 1000;
    if (isOver) passed += share;
    else {
      deadlines.push({ at, value: dollars * (share + passed) });
      passed = 0;
    }
  }
  return deadlines;
}

function joined(deadlines: PlanDeadline[]): PlanDeadline[] {
  const left = deadlines.filter(({ value }) => value > 0);
  const gapAfter = (i: number): number => left[i + 1]!.at - left[i]!.at;
  for (let i = left.length - 2; i >= 0; i--) if (gapAfter(i) === 0) join(left, i);
  while (left.length > MOST_DEADLINES) {
    // What is lost by joining: the later value counts as lost for so much longer. The last one stays.
    let best = 0;
    let least = Infinity;
    for (let i = 0; i < left.length - 2; i++) {
      const price = gapAfter(i) * left[i + 1]!.value;
      if (price < least) [best, least] = [i, price];
    }
    join(left, best);
  }
  return left;
}

function join(deadlines: PlanDeadline[], first: number): void {
  const [a, b] = [deadlines[first]!, deadlines[first + 1]!];
  deadlines.splice(first, 2, { at: a.at, value: a.value + b.value });
}
