import type { Band } from '@shared/domain/forecast/band';
import { forecast } from '@shared/domain/forecast/forecast';
import { factsOf } from './storm-seen';
import { TrueStorm } from './storm-truth';

export interface Held {
  readonly storm: number;
  readonly open: number;
  readonly emptyAt: Place;
  readonly lostCents: Place;
  readonly medicineLost: Place;
  /** Hours from the band's low to its high end. */
  readonly bandHours: number;
  readonly toEmptyHours: number;
  readonly middleHours: number;
}

/** Where the truth lies. */
export type Place = 'below' | 'within' | 'above';

/** Forecasts storms that then go on, and says where the truth came to lie. Lulls and odd ends are left out. */
export function holdAgainst(seeds: readonly number[], futures: number): Held[] {
  return seeds.flatMap((seed) => {
    const storm = new TrueStorm(seed);
    storm.runUntil(storm.lookAt);
    const open = storm.openCalls.length;
    // With less there is no backlog to speak of.
    if (open < 5) return [];
    const { asItIs } = forecast(factsOf(storm), { seed: seed + 1, futures });
    const now = storm.now;
    const truth = storm.outcome();
    const { low, middle, high } = asItIs.emptyAt;
    const never = (at: number | null) => at ?? Infinity;
    return {
      storm: seed,
      open,
      emptyAt: place(truth.emptyAt, {
        low: never(low),
        middle: never(middle),
        high: never(high),
      }),
      lostCents: place(truth.lostCents, asItIs.lostCents),
      medicineLost: place(truth.medicineLost, asItIs.medicineLost),
      bandHours: (never(high) - never(low)) / 3_600_000,
      toEmptyHours: (truth.emptyAt - now) / 3_600_000,
      middleHours: (never(middle) - now) / 3_600_000,
    };
  });
}

const place = (truth: number, { low, high }: Band): Place =>
  truth < low ? 'below' : truth > high ? 'above' : 'within';

export const shareWithin = (
  held: readonly Held[],
  what: 'emptyAt' | 'lostCents' | 'medicineLost',
) => {
  const share = (where: Place) =>
    Math.round((1000 * held.filter((one) => one[what] === where).length) / held.length) / 10;
  return { within: share('within'), below: share('below'), above: share('above') };
};
