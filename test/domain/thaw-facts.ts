import type { CompartmentFacts, CompartmentKind, CoolingLoss } from '@shared/domain/cold-unit';
import { addHours, hoursBetween, type Instant } from '@shared/domain/instant';
import { thawClock, type ThawClock } from '@shared/domain/thaw/thaw-clock';

/** An arbitrary night: cooling was lost at this moment in every example. */
export const LOST_AT: Instant = Date.UTC(2031, 8, 14, 2, 0);

export const at = (hours: number): Instant => addHours(LOST_AT, hours);

export const lossUntil = (restoredHours: number | null = null): CoolingLoss => ({
  lostAt: LOST_AT,
  restoredAt: restoredHours === null ? null : at(restoredHours),
});

/** A compartment of which nothing is known but what the example names. */
export const aCompartment = (
  kind: CompartmentKind,
  known: Partial<CompartmentFacts> = {},
): CompartmentFacts => ({
  kind,
  fill: null,
  door: 'unknown',
  standingOpenSince: null,
  roomF: null,
  beforeF: null,
  readings: [],
  inspections: [],
  dryIce: [],
  ice: [],
  medicine: null,
  coldAtLoss: null,
  valueCents: 20_000,
  ...known,
});

export const aMedicine = (
  medicine: Partial<NonNullable<CompartmentFacts['medicine']>>,
  known: Partial<CompartmentFacts> = {},
): CompartmentFacts =>
  aCompartment('medicine', {
    medicine: {
      kind: 'label-not-read',
      labelHours: null,
      labelMaxF: null,
      frozen: false,
      hoursAlreadyUnrefrigerated: 0,
      ...medicine,
    },
    ...known,
  });

/** At-risk and lost in hours after the loss, as the published tables give them. */
export function hoursOf(clock: ThawClock): { atRisk: number; lost: number | null } {
  return {
    atRisk: hoursBetween(LOST_AT, clock.atRiskAt),
    lost: clock.saveByAt === null ? null : hoursBetween(LOST_AT, clock.saveByAt),
  };
}

export const hoursFor = (facts: CompartmentFacts, restoredHours: number | null = null) =>
  hoursOf(thawClock(facts, lossUntil(restoredHours)));
