import type { Instant } from '../instant';
import type { Draws } from './draws';
import { logGamma } from './log-gamma';
import type { RingClock } from './ring-clock';

/** An outage area and the calls that came from it. */
export interface RingingArea {
  readonly outAt: Instant;
  /** Null while still out; may lie ahead when the utility has named a time. */
  readonly backAt: Instant | null;
  readonly ringsAt: readonly Instant[];
}

/** How the households of a storm ring: one draw of what nobody knows for sure. */
export interface RingHabit {
  /** Ringing hours after the power is back until most of them ring, on average. */
  readonly delay: number;
  /** The share that takes several times as long: those who were away, or hoped. */
  readonly slow: number;
  /** Calls a ringing hour while the power is out, as a share of an area's calls after it. */
  readonly during: number;
  /** Calls of an average area after its power is back. */
  readonly perArea: number;
  /** How alike the areas are: the shape of the gamma distribution of their calls. */
  readonly alike: number;
}

/** How much longer the slow ones take. Our estimate. */
const SLOWER = 3.5;

/**
 * Means and spreads of the logarithms before anything is known; our estimates, wide on purpose: a
 * factor of two to three either way. An area is the ground of one feeder, some hundred homes.
 */
const PRIOR: readonly (readonly [mean: number, spread: number])[] = [
  [Math.log(4.5), 0.6],
  [Math.log(0.02), 1],
  [Math.log(15), 1.1],
  [Math.log(1.2), 0.6],
  [Math.log(0.1), 0.7],
];
/** Steps of the chain that are thrown away, and those between two draws that are kept. */
const WARM_UP = 600;
const THIN = 5;

/** The share of an area's calls that have come `x` ringing hours after the power is back. */
export const rungBy = (x: number, { delay, slow }: RingHabit): number =>
  x <= 0 ? 0 : 1 - (1 - slow) * Math.exp(-x / delay) - slow * Math.exp(-x / (SLOWER * delay));

const density = (x: number, { delay, slow }: RingHabit): number =>
  ((1 - slow) / delay) * Math.exp(-x / delay) +
  (slow / (SLOWER * delay)) * Math.exp(-x / (SLOWER * delay));

/** Ringing hours after the power is back of one household that has not rung by `since` hours. */
export function drawDelay(draws: Draws, { delay, slow }: RingHabit, since: number): number {
  const quickLeft = (1 - slow) * Math.exp(-since / delay);
  const slowLeft = slow * Math.exp(-since / (SLOWER * delay));
  const isQuick = draws.unit() * (quickLeft + slowLeft) < quickLeft;
  return since + draws.exponential(isQuick ? delay : SLOWER * delay);
}

/** What the chain needs of an area: numbers only, worked out once. */
export interface AreaCount {
  readonly rings: number;
  /** Ringing hours without power so far. */
  readonly outHours: number;
  /** Ringing hours since the power is back; 0 while it is not. */
  readonly backHours: number;
}

export function countAreas(
  areas: readonly RingingArea[],
  now: Instant,
  clock: RingClock,
): readonly AreaCount[] {
  return areas.map(({ outAt, backAt, ringsAt }) => {
    const isBack = backAt !== null && backAt <= now;
    return {
      rings: ringsAt.length,
      outHours: Math.max(0, clock.between(outAt, isBack ? backAt : now)),
      backHours: isBack ? clock.between(backAt, now) : 0,
    };
  });
}

/** How much of an area's calls this habit lets one expect to have come by now. */
export const exposure = (area: AreaCount, habit: RingHabit): number =>
  habit.during * area.outHours + rungBy(area.backHours, habit);

/**
 * Draws habits that agree with the calls seen so far, by a random walk over their logarithms
 * (Metropolis et al. 1953). The calls of each area are a Poisson stream whose size is gamma
 * distributed over the areas, so that the sizes can be integrated out: a negative binomial.
 */
export function drawHabits(
  draws: Draws,
  areas: readonly RingingArea[],
  now: Instant,
  clock: RingClock,
  count: number,
): readonly RingHabit[] {
  const counts = countAreas(areas, now, clock);
  const { during, delays } = ringTimes(areas, now, clock);
  const score = (logs: readonly number[]): number => {
    const habit = habitOf(logs);
    let total = during * logs[1]!;
    logs.forEach((value, i) => (total -= ((value - PRIOR[i]![0]) / PRIOR[i]![1]) ** 2 / 2));
    for (const [x, times] of delays) total += times * Math.log(density(x, habit));
    const { alike, perArea } = habit;
    for (const area of counts) {
      const known = exposure(area, habit);
      total +=
        logGamma(alike + area.rings) -
        logGamma(alike) +
        alike * Math.log(alike / perArea) -
        (alike + area.rings) * Math.log(alike / perArea + known);
    }
    return total;
  };

  const steps = PRIOR.map(([, spread]) => spread / 2);
  let at = PRIOR.map(([mean]) => mean);
  let best = score(at);
  const habits: RingHabit[] = [];
  for (let round = 0; habits.length < count; round++) {
    for (let i = 0; i < at.length; i++) {
      const to = at.with(i, at[i]! + steps[i]! * draws.normal());
      const next = score(to);
      const isTaken = Math.log(1 - draws.unit()) < next - best;
      if (isTaken) [at, best] = [to, next];
      // While warming up, steps grow or shrink until four of ten are taken.
      if (round < WARM_UP) steps[i] = steps[i]! * Math.exp((isTaken ? 0.6 : -0.4) * 0.1);
    }
    if (round >= WARM_UP && round % THIN === 0) habits.push(habitOf(at));
  }
  return habits;
}

const habitOf = (logs: readonly number[]): RingHabit => ({
  delay: Math.exp(logs[0]!),
  during: Math.exp(logs[1]!),
  perArea: Math.exp(logs[2]!),
  alike: Math.exp(logs[3]!),
  slow: Math.min(0.6, Math.exp(logs[4]!)),
});

/** Calls before the power was back, and after how many ringing hours the others came, in classes. */
function ringTimes(areas: readonly RingingArea[], now: Instant, clock: RingClock) {
  let during = 0;
  const delays = new Map<number, number>();
  for (const { backAt, ringsAt } of areas) {
    for (const at of ringsAt) {
      if (backAt === null || backAt > now || at < backAt) during++;
      else {
        const hours = clock.between(backAt, at);
        const classed = hours < 12 ? Math.round(hours * 4) / 4 : Math.round(hours);
        delays.set(classed, (delays.get(classed) ?? 0) + 1);
      }
    }
  }
  return { during, delays };
}
