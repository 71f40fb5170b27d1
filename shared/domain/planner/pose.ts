import type { PlanDeadline, PlanJob } from './problem';

/**
 * How the board's wishes become a planning problem, for the product and for the simulation alike: the
 * margins that make a good plan of what is not known for certain. They are no rules of the trade. Each was
 * tried on made-up storms (`npm run simulate`); the figures are in DEVELOPERS.md. What things cost is for
 * the manager to say (plan-prices.ts).
 */
export interface Posing {
  /** Parts of a value that count as lost so many seconds before its limit. */
  readonly foodSpread: readonly SpreadPart[];
  /** The same for medicine: visits before it may take longer than thought, so it is aimed at earlier. */
  readonly medicineSpread: readonly SpreadPart[];
  /** Seconds before a promised window's end from which on its price is counted once already. */
  readonly windowMargin: number;
}

export interface SpreadPart {
  readonly secondsBefore: number;
  readonly share: number;
}

export const POSING: Posing = {
  foodSpread: [
    { secondsBefore: 20 * 60, share: 0.3 },
    { secondsBefore: 0, share: 0.7 },
  ],
  medicineSpread: [
    { secondsBefore: 120 * 60, share: 0.1 },
    { secondsBefore: 60 * 60, share: 0.2 },
    { secondsBefore: 20 * 60, share: 0.3 },
    { secondsBefore: 0, share: 0.4 },
  ],
  windowMargin: 25 * 60,
};

/** How much a minute of waiting counts for food that can still be saved; the planner's own scale. */
const FOOD_WEIGHT = 2;

/** What one compartment loses by a later start. */
export interface PosedStake {
  /** Dollars, weighed. */
  readonly value: number;
  readonly isMedicine: boolean;
  /** In order, the last one its limit, all shares 1 together; none where no rule ever calls it lost. */
  readonly moments: readonly { readonly at: number; readonly share: number }[];
}

export interface CallToPose {
  /** What can still be saved. */
  readonly stakes: readonly PosedStake[];
  readonly window: readonly [from: number, to: number] | null;
}

export interface PosingSetting {
  /** Seconds, on the problem's clock. */
  readonly now: number;
  /** How much waiting counts where medicine can still be saved. */
  readonly medicineWeight: number;
  /** What missing a promised window costs. */
  readonly lateDollars: number;
  readonly posing?: Posing;
}

/**
 * What a call asks of the planner. The promised window stays as it was promised, so that lateness is
 * what the customer would call late; what aims earlier are deadlines before it.
 */
export function posedCall(
  { stakes, window }: CallToPose,
  { now, medicineWeight, lateDollars, posing = POSING }: PosingSetting,
): Required<Pick<PlanJob, 'weight' | 'deadlines'>> & Pick<PlanJob, 'windows'> {
  const lost = stakes.flatMap((stake) => spreadBefore(stake, now, posing));
  const promise = window
    ? [{ at: Math.max(window[0], window[1] - posing.windowMargin), value: lateDollars }]
    : [];
  const weight = stakes.some(({ isMedicine }) => isMedicine)
    ? medicineWeight
    : stakes.some(({ value }) => value > 0)
      ? Math.min(FOOD_WEIGHT, medicineWeight)
      : 1;
  return {
    weight,
    ...(window ? { windows: [window] } : {}),
    deadlines: [...joined(lost.sort(byMoment)), ...promise].sort(byMoment),
  };
}

/**
 * The moments of a stake, with parts of its last one counted earlier: food as food, medicine as
 * medicine. A part whose moment has passed counts at the next, since until the limit all of it can be saved.
 */
function spreadBefore(
  { moments, value, isMedicine }: PosedStake,
  now: number,
  { foodSpread, medicineSpread }: Posing,
): PlanDeadline[] {
  const limit = moments.at(-1);
  if (!limit) return [];
  const parts = (isMedicine ? medicineSpread : foodSpread).map(({ secondsBefore, share }) => ({
    at: limit.at - secondsBefore,
    share: limit.share * share,
  }));
  const spread = [...moments.slice(0, -1), ...parts].map(({ at, share }) => ({
    at,
    value: value * share,
  }));
  return withoutPassed(spread.sort(byMoment), now);
}

/** In order; what has passed counts at the next moment. The last one stays, whatever the time. */
function withoutPassed(moments: readonly PlanDeadline[], now: number): PlanDeadline[] {
  const left: PlanDeadline[] = [];
  let passed = 0;
  moments.forEach(({ at, value }, index) => {
    if (at < now && index < moments.length - 1) passed += value;
    else {
      left.push({ at, value: value + passed });
      passed = 0;
    }
  });
  return left;
}

/** The planner looks at this many moments of a call's losses. */
export const MOST_DEADLINES = 6;

const byMoment = (one: PlanDeadline, other: PlanDeadline): number => one.at - other.at;

/**
 * Of more moments than the planner looks at, the closest are joined at the earlier one; the last stays as it
 * is, so that a call which still has something to save says so.
 *
 * @returns in order; the values add up to those that came in
 */
function joined(deadlines: readonly PlanDeadline[]): PlanDeadline[] {
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

/**
 * Whether a better plan is worth the trouble of changing the one that people know.
 *
 * @param gain by how much its price is lower
 * @param leastGain what a change has to gain, as the manager has set it
 */
export const isWorthChanging = (gain: number, leastGain: number): boolean => gain >= leastGain;
