import type { CallRow } from '@shared/contract/calls';
import { isOpen } from '@shared/domain/call-state';
import type { Instant } from '@shared/domain/instant';
import { byUrgency, type CompartmentOnClock, type Urgency, urgency } from '@shared/domain/urgency';

export interface RankedCall {
  readonly call: CallRow;
  readonly urgency: Urgency;
}

/**
 * Puts open calls in the order of the queue. Between two minutes only the calls that changed are
 * worked out again, so that a change costs a sort and not three thousand clocks.
 */
export class Ranking {
  private known = new Map<string, RankedCall>();
  private at: Instant | null = null;
  private medicine = NaN;

  /** `now` should move by the minute; `medicine` is the weight from the settings. */
  rank(calls: Iterable<CallRow>, now: Instant, medicine: number): readonly RankedCall[] {
    if (now !== this.at || medicine !== this.medicine) {
      this.known = new Map();
      this.at = now;
      this.medicine = medicine;
    }
    const next = new Map<string, RankedCall>();
    for (const call of calls) {
      if (!isOpen(call.state)) continue;
      const known = this.known.get(call.id);
      next.set(call.id, known?.call === call ? known : rankedCall(call, now, medicine));
    }
    this.known = next;
    return [...next.values()].sort(inQueueOrder);
  }
}

export const rankedCall = (call: CallRow, now: Instant, medicine: number): RankedCall => ({
  call,
  urgency: urgency(onClocks(call), call, now, { medicine }),
});

/** Equal urgency keeps the order of arrival, so that two rows never change places by chance. */
const inQueueOrder = (a: RankedCall, b: RankedCall): number =>
  byUrgency(a.urgency, b.urgency) || a.call.number - b.call.number;

const onClocks = (call: CallRow): CompartmentOnClock[] =>
  call.units.flatMap((unit) =>
    unit.compartments.map((row) => ({
      facts: row,
      // Proof of cold after the restoration matters to the household, not to the order.
      clock: { atRiskAt: row.atRiskAt, saveByAt: row.saveByAt, recoveredAt: null },
    })),
  );
