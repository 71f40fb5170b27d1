import {
  coolingLoss,
  type CompartmentFacts,
  type PowerTimes,
  type RanBetween,
  type UnitOnClock,
} from '@shared/domain/cold-unit';
import { thawClock } from '@shared/domain/thaw/thaw-clock';

/** What is stored of a clock beside the facts that it follows from. */
export interface WoundClock {
  readonly atRiskAt: Date;
  readonly earliestAt: Date;
  readonly likelyAt: Date | null;
  readonly saveByAt: Date | null;
  readonly reasons: string[];
}

/** The clock of one compartment, as the database keeps it. */
export function woundClock(
  times: PowerTimes,
  unit: UnitOnClock & { readonly ranBetween: RanBetween },
  facts: CompartmentFacts,
): WoundClock {
  const clock = thawClock(facts, coolingLoss(times, unit.ranBetween), unit);
  const date = (at: number | null): Date | null => (at === null ? null : new Date(at));
  return {
    atRiskAt: new Date(clock.atRiskAt),
    earliestAt: new Date(clock.earliestAt),
    likelyAt: date(clock.likelyAt),
    saveByAt: date(clock.saveByAt),
    reasons: [...clock.reasons],
  };
}
