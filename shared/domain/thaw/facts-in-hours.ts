import type { CompartmentFacts, CoolingLoss, InspectionFinding, UnitOnClock } from '../cold-unit';
import { hoursBetween, type Instant } from '../instant';
import type { AdviceKey } from './advice';
import { uncooledTime, type UncooledTime } from './uncooled-time';

/** What is known of a compartment, with every moment in hours after cooling was lost. */
export interface FactsInHours extends Pick<
  CompartmentFacts,
  'fill' | 'door' | 'roomF' | 'beforeF' | 'medicine' | 'coldAtLoss'
> {
  readonly standingOpenFrom: number | null;
  readonly readings: readonly { readonly hours: number; readonly temperatureF: number }[];
  readonly inspections: readonly { readonly hours: number; readonly finding: InspectionFinding }[];
  readonly dryIce: readonly {
    readonly hours: number;
    readonly pounds: number;
    readonly cubicFeet: number;
  }[];
  readonly ice: readonly { readonly hours: number }[];
  /** Inside volume of the whole unit, cubic feet. */
  readonly unitCubicFeet: number | null;
  readonly isPartlyCooled: boolean;
  /** Hours without cooling, which the limits of an outage count; everything else counts on the wall. */
  readonly time: UncooledTime;
}

/**
 * What a clock says, in hours after cooling was lost: `0 <= atRiskHours <= lostHours` and
 * `0 <= earliestHours <= likelyHours <= lostHours`.
 */
export interface ClockHours {
  readonly atRiskHours: number;
  /** From here the contents may have passed their temperature, and from here they likely have. */
  readonly earliestHours: number;
  /** `null` with `lostHours`. */
  readonly likelyHours: number | null;
  /** `null`: no rule here may call the contents lost. */
  readonly lostHours: number | null;
  /** When a measurement found the contents warm for longer than the published limit allows. */
  readonly overrunHours: readonly number[];
  /** In plain words, each with the name of its source. */
  readonly reasons: readonly string[];
  readonly advice: AdviceKey;
}

/**
 * @param until facts after this moment belong to another story (the compartment had recovered)
 */
export function factsInHours(
  facts: CompartmentFacts,
  { lostAt, ranSpans = [] }: CoolingLoss,
  unit: UnitOnClock,
  until: Instant | null,
): FactsInHours {
  const { fill, door, roomF, beforeF, medicine, coldAtLoss, standingOpenSince } = facts;
  const hours = (moment: Instant): number => hoursBetween(lostAt, moment);
  const counts = ({ at }: { readonly at: Instant }): boolean => until === null || at <= until;
  return {
    fill,
    door,
    roomF,
    beforeF,
    medicine,
    coldAtLoss,
    standingOpenFrom: standingOpenSince === null ? null : hours(standingOpenSince),
    readings: facts.readings
      .filter(counts)
      .map(({ at, temperatureF }) => ({ hours: hours(at), temperatureF })),
    inspections: facts.inspections
      .filter(counts)
      .map(({ at, finding }) => ({ hours: hours(at), finding })),
    dryIce: facts.dryIce
      .filter(counts)
      .map(({ at, pounds, cubicFeet }) => ({ hours: hours(at), pounds, cubicFeet })),
    ice: facts.ice.filter(counts).map(({ at }) => ({ hours: hours(at) })),
    unitCubicFeet: unit.cubicFeet,
    isPartlyCooled: unit.cooling === 'partial',
    time: uncooledTime(lostAt, ranSpans),
  };
}

/** '2.6 h', '24 h', '28 days': hours as they are said. */
export function hoursInWords(hours: number): string {
  if (hours > 72 && hours % 24 === 0) return `${hours / 24} days`;
  return `${Math.round(hours * 10) / 10} h`;
}
