import { hoursInWords, type FactsInHours } from './facts-in-hours';
import type { WarmFinding } from './temperature-record';

/**
 * How surely contents keep: the moment from which they may have passed their temperature, and the one
 * from which they likely have. Both in hours after the loss; the published limit is the last moment.
 */
export interface Spread {
  readonly earliestHours: number;
  readonly likelyHours: number;
}

/** Something that was found or done, and what it tells of the spread. */
export interface SpreadEvent {
  readonly hours: number;
  /** At one moment: first what was found, then what was done about it. */
  readonly rank: number;
  readonly apply: (spread: Spread) => Spread;
}

/** Hours without cooling, counted on from a moment on the wall. */
export const laterBy = ({ time }: FactsInHours, fromHours: number, hours: number): number =>
  time.wallAfter(time.uncooledBy(fromHours) + hours);

/**
 * The spread after everything that was found and done, in the order in which it happened, within
 * the published limit. What followed the first warm finding changes nothing any more.
 */
export function spreadWithin(
  start: Spread,
  events: readonly SpreadEvent[],
  warm: readonly WarmFinding[],
  lostHours: number,
): Spread {
  const [firstWarm] = warm;
  const counted = [...events]
    .filter(({ hours }) => hours >= 0 && (firstWarm === undefined || hours < firstWarm.hours))
    .sort((a, b) => a.hours - b.hours || a.rank - b.rank);
  const { earliestHours, likelyHours } = counted.reduce((spread, one) => one.apply(spread), start);
  const { coldUntilHours, hours } = firstWarm ?? { coldUntilHours: Infinity, hours: Infinity };
  const within = (least: number, moment: number): number =>
    Math.min(lostHours, Math.max(least, moment));
  const earliest = within(0, Math.min(earliestHours, coldUntilHours));
  return { earliestHours: earliest, likelyHours: within(earliest, Math.min(likelyHours, hours)) };
}

/** The door was found standing open: what is likely is counted as with a door opened many times. */
export const doorFoundOpen = (openFrom: number): SpreadEvent => ({
  hours: Math.max(0, openFrom),
  rank: 1,
  apply: ({ earliestHours, likelyHours }) => {
    const from = Math.max(0, openFrom);
    return {
      earliestHours: Math.min(earliestHours, from),
      likelyHours: likelyHours > from ? from + (likelyHours - from) / 2 : likelyHours,
    };
  },
});

/** The spread in words, or nothing where the published limit is all there is to say. */
export function spreadReason(
  what: string,
  { earliestHours, likelyHours }: Spread,
  lostHours: number,
  source: string,
): readonly string[] {
  if (hoursInWords(earliestHours) === hoursInWords(lostHours)) return [];
  return [
    `${what} perhaps from ${hoursInWords(earliestHours)}, likely from ${hoursInWords(likelyHours)} ` +
      `(our estimate from ${source}); the limit of ${hoursInWords(lostHours)} stands`,
  ];
}
