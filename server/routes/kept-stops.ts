import { MINUTE_MS } from '@shared/domain/instant';
import { heldCount, missingSkills } from '@shared/domain/route-rules';
import type { PlanFacts, TechnicianToPlan } from './plan-facts';

/** Why a stop keeps its place though nobody has accepted or locked it. */
export type KeptStop = 'soon' | 'changes-used-up';

/**
 * Stops that no plan may move now, besides the accepted and locked ones: those that begin within the
 * minutes asked for, and the stops soon to come of technicians whose changes of this hour are used
 * up. They open their routes, so all before them stay as well.
 */
export function keptStops(
  facts: PlanFacts,
  {
    keepMinutes = 0,
    keepAlso,
  }: { readonly keepMinutes?: number; readonly keepAlso?: ReadonlySet<string> },
): ReadonlyMap<string, KeptStop> {
  const { settings, now, changesThisHour } = facts;
  const kept = new Map<string, KeptStop>();
  for (const technician of facts.technicians) {
    const isUsedUp =
      (keepAlso?.has(technician.id) ?? false) ||
      (changesThisHour.get(technician.id) ?? 0) >= settings.changesPerHour;
    const soon = now + keepMinutes * MINUTE_MS;
    const near = isUsedUp ? now + settings.promisedAheadMinutes * MINUTE_MS : soon;
    const end = Math.max(lastBefore(technician, soon), lastBefore(technician, near));
    technician.stops.slice(heldCount(technician.stops), end).forEach((stop) => {
      const call = facts.calls.get(stop.callId);
      if (!call || call.cutOff || missingSkills(call.skills, technician.skills).length > 0) return;
      kept.set(stop.callId, stop.arriveAt < soon ? 'soon' : 'changes-used-up');
    });
  }
  return kept;
}

/** How many stops at the head of a route end with the last that begins before then. */
const lastBefore = ({ stops }: TechnicianToPlan, then: number): number =>
  stops.findLastIndex(({ arriveAt }) => arriveAt < then) + 1;
