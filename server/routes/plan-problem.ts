import type { PlanPrices } from '@shared/contract/plan-prices';
import { isPlannable } from '@shared/domain/call-state';
import type { Instant } from '@shared/domain/instant';
import { lossStakes } from '@shared/domain/planner/loss-deadlines';
import { weightsOf } from '@shared/domain/planner/plan-prices';
import { posedCall } from '@shared/domain/planner/pose';
import type {
  PlanJob,
  PlanShift,
  PlanTechnician,
  PreviousPlan,
} from '@shared/domain/planner/problem';
import { heldCount, isUnderWay, shiftOf, type WorkShift } from '@shared/domain/route-rules';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { PlannerRequest } from '../workers/planner-client';
import { keptStops, type KeptStop } from './kept-stops';
import type { CallToPlan, PlanFacts, TechnicianToPlan } from './plan-facts';
import { minutesAtDoor } from './visit-facts';

export type Problem = Pick<PlannerRequest, 'problem' | 'points'> & {
  /** Stops that no plan may move now, though nobody has accepted or locked them, and why. */
  readonly kept: ReadonlyMap<string, KeptStop>;
};

export interface ProblemOptions {
  /** Other prices than those that are set, to try them. */
  readonly prices?: Partial<PlanPrices> | undefined;
  /** Stops that begin within so many minutes stay. */
  readonly keepMinutes?: number;
  /** Technicians whose stops soon to come stay besides. */
  readonly keepAlso?: ReadonlySet<string>;
}

/** The planner counts in seconds, the board in milliseconds. */
export const seconds = (at: Instant): number => Math.floor(at / 1000);

/**
 * The planner's problem. Accepted and locked stops open their routes as they stand; a stop under way
 * is where its technician starts from. Money is in dollars, as the planner's own prices are.
 */
export function planProblem(stored: PlanFacts, options: ProblemOptions = {}): Problem {
  const facts = options.prices
    ? { ...stored, settings: { ...stored.settings, ...options.prices } }
    : stored;
  const points: LonLat[] = [];
  const place = (at: LonLat): number => points.push(at) - 1;
  const technicians: PlanTechnician[] = [];
  const jobs = new Map<string, PlanJob>();
  const held = new Set<string>();
  const kept = keptStops(facts, options);

  for (const technician of facts.technicians) {
    const ahead = technician.stops.filter(
      (stop, index) => index < heldCount(technician.stops) || kept.has(stop.callId),
    );
    for (const stop of ahead) held.add(stop.callId);
    if (!mayBePlanned(technician)) continue;
    const { at, freeAt } = startOf(technician, facts);
    const start = place(at);
    technicians.push({
      id: technician.id,
      home: place(technician.home),
      at: start,
      availableAt: seconds(freeAt),
      skills: technician.skills,
      parts: technician.van,
      shifts: technician.shifts.map(shiftToPlan),
      frozen: ahead.filter((stop) => !isUnderWay(stop.state)).map((stop) => stop.callId),
    });
    for (const stop of ahead) {
      const call = facts.calls.get(stop.callId);
      if (!call || isUnderWay(stop.state)) continue;
      // A household put on a route by hand whose place nobody knows: no drive can be counted.
      jobs.set(call.id, jobOf(call, call.lonLat ? place(call.lonLat) : start, facts));
    }
  }
  for (const call of facts.calls.values())
    if (!held.has(call.id) && isPlannable(call.state) && call.lonLat && !call.cutOff)
      jobs.set(call.id, jobOf(call, place(call.lonLat), facts));

  const { shopPlace, shopMinutes } = facts.settings;
  return {
    problem: {
      version: 1,
      now: seconds(facts.now),
      jobs: [...jobs.values()],
      technicians,
      previous: routesInForce(facts, kept),
      weights: weightsOf(facts.settings),
      ...(shopPlace ? { shop: { loc: place(shopPlace), seconds: shopMinutes * 60 } } : {}),
    },
    points,
    kept,
  };
}

export const mayBePlanned = (technician: TechnicianToPlan): boolean =>
  technician.active && technician.shifts.length > 0;

const shiftToPlan = ({ startsAt, endsAt, breaks }: WorkShift): PlanShift => ({
  start: seconds(startsAt),
  end: seconds(endsAt),
  ...(breaks && breaks.length > 0
    ? {
        breaks: breaks.map(({ from, to, minutes }) => ({
          from: seconds(from),
          to: seconds(to),
          seconds: minutes * 60,
        })),
      }
    : {}),
});

/** Where and when the technician is free: after the stop under way, if there is one. */
function startOf(
  technician: TechnicianToPlan,
  facts: PlanFacts,
): { readonly at: LonLat; readonly freeAt: Instant } {
  const underWay = technician.stops.find((stop) => isUnderWay(stop.state));
  if (!underWay) return { at: technician.at, freeAt: facts.now };
  return {
    at: facts.calls.get(underWay.callId)?.lonLat ?? technician.at,
    freeAt: Math.max(facts.now, underWay.finishAt),
  };
}

function jobOf(call: CallToPlan, loc: number, facts: PlanFacts): PlanJob {
  const { settings, now } = facts;
  const visit = facts.visits.get(call.id);
  const allowed =
    call.declinedBy.length === 0
      ? null
      : facts.technicians.map(({ id }) => id).filter((id) => !call.declinedBy.includes(id));
  const { service, serviceBy } = serviceOf(call, facts);
  // Whoever takes longer may not be promised what only the quick ones can save.
  const longest = Math.max(service, ...Object.values(serviceBy));
  return {
    id: call.id,
    loc,
    service,
    ...(Object.keys(serviceBy).length > 0 ? { serviceBy } : {}),
    calledAt: seconds(call.receivedAt),
    skills: call.skills,
    ...(visit && visit.needs.length > 0 ? { parts: visit.needs } : {}),
    ...(allowed ? { onlyTechnicians: allowed } : {}),
    ...posedCall(
      {
        stakes: lossStakes(call.compartments, {
          now,
          serviceSeconds: longest,
          weights: { medicine: settings.medicineWeight, household: settings.householdWeight },
          householdAtRisk: call.householdAtRisk,
        }),
        window: visit?.window ? [seconds(visit.window.from), seconds(visit.window.to)] : null,
      },
      { now: seconds(now), ...settings },
    ),
  };
}

/** Seconds at the door, and those of technicians who take longer or less. */
function serviceOf(
  { id }: CallToPlan,
  { visits, settings, learned, technicians }: PlanFacts,
): { readonly service: number; readonly serviceBy: Readonly<Record<string, number>> } {
  const visit = visits.get(id) ?? { cause: null, units: 1 };
  const service = minutesAtDoor(visit, settings, learned) * 60;
  if (!learned) return { service, serviceBy: {} };
  return {
    service,
    serviceBy: Object.fromEntries(
      technicians.flatMap((technician) => {
        const own = minutesAtDoor(visit, settings, learned, technician.id) * 60;
        return own === service ? [] : [[technician.id, own]];
      }),
    ),
  };
}

function routesInForce(facts: PlanFacts, kept: ReadonlyMap<string, unknown>): PreviousPlan {
  const { mostOvertimeMinutes } = facts.settings;
  return {
    routes: facts.technicians.filter(mayBePlanned).flatMap((technician) => {
      const open = technician.stops.filter((stop) => !isUnderWay(stop.state));
      const held = Math.max(
        heldCount(open),
        open.findLastIndex(({ callId }) => kept.has(callId)) + 1,
      );
      return technician.shifts.map((_, shift) => ({
        technician: technician.id,
        shift,
        stops: open
          // What is held opens the first shift, as it does in the problem.
          .filter((stop, index) =>
            index < held
              ? shift === 0
              : shiftOf(technician.shifts, stop.arriveAt, mostOvertimeMinutes) === shift,
          )
          .map((stop) => ({ job: stop.callId, start: seconds(stop.arriveAt) })),
      }));
    }),
  };
}
