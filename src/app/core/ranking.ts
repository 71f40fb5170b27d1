import type { CallRow } from '@shared/contract/calls';
import { isOpen } from '@shared/domain/call-state';
import type { Settings } from '@shared/contract/office';
import { addMinutes, type Instant } from '@shared/domain/instant';
import {
  byUrgency,
  type CompartmentOnClock,
  DEFAULT_REACH_MINUTES,
  DEFAULT_WEIGHTS,
  type Urgency,
  urgency,
  type UrgencyWeights,
} from '@shared/domain/urgency';

export interface RankedCall {
  readonly call: CallRow;
  readonly urgency: Urgency;
}

/** How calls are weighed, as the manager has set it. */
export interface Weighing {
  readonly weights: UrgencyWeights;
  /** Minutes until somebody could be at a door. */
  readonly reachMinutes: number;
}

export const DEFAULT_WEIGHING: Weighing = {
  weights: DEFAULT_WEIGHTS,
  reachMinutes: DEFAULT_REACH_MINUTES,
};

export const weighingBy = (settings: Settings | null): Weighing =>
  settings === null
    ? DEFAULT_WEIGHING
    : {
        weights: { medicine: settings.medicineWeight, household: settings.householdWeight },
        reachMinutes: settings.reachMinutes,
      };

/**
 * Puts open calls in the order of the queue. Between two minutes only the calls that changed are
 * worked out again, so that a change costs a sort and not three thousand clocks.
 */
export class Ranking {
  private known = new Map<string, RankedCall>();
  private at: Instant | null = null;
  private weighing: Weighing | null = null;

  /** `now` should move by the minute, and `weighing` be another object only when it differs. */
  rank(calls: Iterable<CallRow>, now: Instant, weighing: Weighing): readonly RankedCall[] {
    if (now !== this.at || weighing !== this.weighing) {
      this.known = new Map();
      this.at = now;
      this.weighing = weighing;
    }
    const next = new Map<string, RankedCall>();
    for (const call of calls) {
      if (!isOpen(call.state)) continue;
      const known = this.known.get(call.id);
      next.set(call.id, known?.call === call ? known : rankedCall(call, now, weighing));
    }
    this.known = next;
    return [...next.values()].sort(inQueueOrder);
  }
}

export const rankedCall = (
  call: CallRow,
  now: Instant,
  { weights, reachMinutes }: Weighing,
): RankedCall => ({
  call,
  urgency: urgency(onClocks(call), call, now, {
    weights,
    couldBeThere: addMinutes(now, reachMinutes),
    householdAtRisk: call.householdAtRisk,
  }),
});

/** Equal urgency keeps the order of arrival, so that two rows never change places by chance. */
const inQueueOrder = (a: RankedCall, b: RankedCall): number =>
  byUrgency(a.urgency, b.urgency) || a.call.number - b.call.number;

const onClocks = (call: CallRow): CompartmentOnClock[] =>
  call.units.flatMap((unit) =>
    unit.compartments.map((row) => ({
      facts: row,
      // Proof of cold after the restoration matters to the household, not to the order.
      clock: { ...row, recoveredAt: null },
    })),
  );
