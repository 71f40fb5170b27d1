import type { CallRow } from '@shared/contract/calls';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import { shareOfHours } from '../board/cold-strip-scale';

/** Hours from now between which losses are added up: one by one while a dispatcher still decides. */
const EDGES: readonly number[] = [
  0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 16, 20, 24, 30, 36, 42, 48,
];

export interface LossBar {
  readonly fromHours: number;
  readonly toHours: number;
  /** Places on the common ruler of hours, 0 to 1. */
  readonly from: number;
  readonly to: number;
  readonly cents: number;
  /** What the bar's height tells, so that a bar of six hours does not look six times as bad. */
  readonly centsPerHour: number;
}

export interface LossFront {
  readonly bars: readonly LossBar[];
  readonly savedCents: number;
  readonly lostCents: number;
  /** Beyond the ruler, or without a published hour. */
  readonly laterCents: number;
}

/**
 * When the value that is still at risk will be lost if nothing is done. Saved, lost, the bars and
 * later add up to the value of all calls; a duplicate's household counts once.
 */
export function lossFront(calls: Iterable<CallRow>, now: Instant): LossFront {
  const cents = new Array<number>(EDGES.length - 1).fill(0);
  let savedCents = 0;
  let lostCents = 0;
  let laterCents = 0;
  for (const { state, restoredAt, units } of calls) {
    if (state === 'duplicate') continue;
    for (const { saveByAt, valueCents } of units.flatMap((unit) => unit.compartments)) {
      const isBack = restoredAt !== null && restoredAt <= now;
      if (isBack && (saveByAt === null || restoredAt < saveByAt)) savedCents += valueCents;
      else if (saveByAt !== null && saveByAt <= now) lostCents += valueCents;
      else {
        const bin = saveByAt === null ? -1 : binOf((saveByAt - now) / HOUR_MS);
        if (bin < 0) laterCents += valueCents;
        else cents[bin] = (cents[bin] ?? 0) + valueCents;
      }
    }
  }
  return { bars: cents.map(barOf), savedCents, lostCents, laterCents };
}

/** What is lost within so many hours from now; an edge of the bars. */
export const lostWithin = ({ bars }: LossFront, hours: number): number =>
  bars.filter((bar) => bar.toHours <= hours).reduce((sum, bar) => sum + bar.cents, 0);

/** An edge belongs to the bar that it ends: what is lost at hour 1 sharp is lost within the hour. */
function binOf(hours: number): number {
  return EDGES.findIndex(
    (edge, i) => i < EDGES.length - 1 && hours > edge && hours <= EDGES[i + 1]!,
  );
}

function barOf(cents: number, index: number): LossBar {
  const fromHours = EDGES[index] ?? 0;
  const toHours = EDGES[index + 1] ?? fromHours;
  return {
    fromHours,
    toHours,
    from: shareOfHours(fromHours),
    to: shareOfHours(toHours),
    cents,
    centsPerHour: cents / (toHours - fromHours),
  };
}
