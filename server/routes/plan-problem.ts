import { isPlannable } from '@shared/domain/call-state';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import type {
  PlanDeadline,
  PlanJob,
  PlanTechnician,
  PreviousPlan,
} from '@shared/domain/planner/problem';
import { heldCount, isUnderWay, shiftOf } from '@shared/domain/route-rules';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { PlannerRequest } from '../workers/planner-client';
import type { CallToPlan, PlanFacts, TechnicianToPlan } from './plan-facts';

/** How much a minute of waiting counts for food that can still be saved; the planner's own scale. */
const FOOD_WEIGHT = 2;

export type Problem = Pick<PlannerRequest, 'problem' | 'points'>;

/** The planner counts in seconds, the board in milliseconds. */
export const seconds = (at: Instant): number => Math.floor(at / 1000);

/**
 * The planner's problem. Accepted and locked stops open their routes as they stand; a stop under way
 * is where its technician starts from. Money is in dollars, as the planner's own prices are.
 */
export function planProblem(facts: PlanFacts): Problem {
  const points: LonLat[] = [];
  const place = (at: LonLat): number => points.push(at) - 1;
  const technicians: PlanTechnician[] = [];
  const jobs = new Map<string, PlanJob>();
  const kept = new Set<string>();

  for (const technician of facts.technicians) {
    const held = technician.stops.slice(0, heldCount(technician.stops));
    for (const stop of held) kept.add(stop.callId);
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
      shifts: technician.shifts.map((shift) => ({
        start: seconds(shift.startsAt),
        end: seconds(shift.endsAt),
      })),
      frozen: held.filter((stop) => !isUnderWay(stop.state)).map((stop) => stop.callId),
    });
    for (const stop of held) {
      const call = facts.calls.get(stop.callId);
      if (!call || isUnderWay(stop.state)) continue;
      // A household put on a route by hand whose place nobody knows: no drive can be counted.
      jobs.set(call.id, jobOf(call, call.lonLat ? place(call.lonLat) : start, facts));
    }
  }
  for (const call of facts.calls.values())
    if (!kept.has(call.id) && isPlannable(call.state) && call.lonLat && !call.cutOff)
      jobs.set(call.id, jobOf(call, place(call.lonLat), facts));

  return {
    problem: {
      version: 1,
      now: seconds(facts.now),
      jobs: [...jobs.values()],
      technicians,
      previous: routesInForce(facts),
    },
    points,
  };
}

export const mayBePlanned = (technician: TechnicianToPlan): boolean =>
  technician.active && technician.shifts.length > 0;

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
  const live = call.compartments.filter(({ saveByAt }) => saveByAt === null || saveByAt > now);
  const weight = live.some(({ kind }) => kind === 'medicine')
    ? settings.medicineWeight
    : live.some(({ valueCents }) => valueCents > 0)
      ? Math.min(FOOD_WEIGHT, settings.medicineWeight)
      : 1;
  const [part] = call.parts;
  const allowed =
    call.declinedBy.length === 0
      ? null
      : facts.technicians.map(({ id }) => id).filter((id) => !call.declinedBy.includes(id));
  return {
    id: call.id,
    loc,
    service: settings.serviceMinutes * 60,
    calledAt: seconds(call.receivedAt),
    weight,
    skills: call.skills,
    // The likeliest one: the planner counts one part a visit.
    ...(part === undefined ? {} : { part }),
    ...(allowed ? { onlyTechnicians: allowed } : {}),
    deadlines: live.flatMap((one): PlanDeadline[] => {
      if (one.saveByAt === null) return [];
      const isMedicine = one.kind === 'medicine';
      return [
        {
          at: latestStart(one.saveByAt, settings.serviceMinutes),
          value: (one.valueCents / 100) * (isMedicine ? settings.medicineWeight : 1),
        },
      ];
    }),
  };
}

/** Contents are saved when cooling runs before their save-by, so the work has to be done by then. */
export const latestStart = (saveByAt: Instant, serviceMinutes: number): number =>
  seconds(saveByAt - serviceMinutes * MINUTE_MS - 1);

function routesInForce(facts: PlanFacts): PreviousPlan {
  return {
    routes: facts.technicians.filter(mayBePlanned).flatMap((technician) => {
      const open = technician.stops.filter((stop) => !isUnderWay(stop.state));
      const held = heldCount(open);
      return technician.shifts.map((_, shift) => ({
        technician: technician.id,
        shift,
        stops: open
          // What is held opens the first shift, as it does in the problem.
          .filter((stop, index) =>
            index < held ? shift === 0 : shiftOf(technician.shifts, stop.arriveAt) === shift,
          )
          .map((stop) => ({ job: stop.callId, start: seconds(stop.arriveAt) })),
      }));
    }),
  };
}
