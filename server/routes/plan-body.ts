import type { PlanDto, PlanFigures } from '@shared/contract/routes';
import { isPlannable } from '@shared/domain/call-state';
import type { Instant } from '@shared/domain/instant';
import type { Plan, PlanRoute, UnassignedReason } from '@shared/domain/planner/problem';
import type { PlanSummary, StopReason } from '@shared/domain/planner/plan-summary';
import { heldCount, isUnderWay } from '@shared/domain/route-rules';
import { minutesInWords } from '@shared/domain/urgency';
import { MINUTE_MS } from '@shared/domain/instant';
import type { PlannerResponse } from '../workers/planner-client';
import type { CallToPlan, PlanFacts, TechnicianToPlan } from './plan-facts';
import { mayBePlanned, seconds } from './plan-problem';
import type { PlanBody } from './plan-rows';

/** The planner's answer in the words and the money of the board. */
export function planBody(facts: PlanFacts, answer: PlannerResponse | null): PlanBody {
  const plan = answer?.plan ?? NOTHING;
  const before = answer?.before?.plan ?? NOTHING;
  return {
    ...(answer ? { drivesFrom: answer.source } : {}),
    routes: facts.technicians.flatMap((technician) => {
      const stops = stopsOf(technician, plan, facts, answer);
      return stops.length === 0 ? [] : [{ technicianId: technician.id, stops }];
    }),
    unplanned: unplanned(facts, plan),
    figures: figuresOf(facts, plan, answer?.summary),
    inForce: figuresOf(facts, before, answer?.before?.summary),
  };
}

const NOTHING: Pick<Plan, 'routes' | 'unassigned'> = { routes: [], unassigned: [] };

type PlannedStop = PlanDto['routes'][number]['stops'][number];

function stopsOf(
  technician: TechnicianToPlan,
  plan: Pick<Plan, 'routes'>,
  facts: PlanFacts,
  answer: PlannerResponse | null,
): PlannedStop[] {
  const held = new Set(
    technician.stops.slice(0, heldCount(technician.stops)).map((stop) => stop.callId),
  );
  // The planner knows nothing of stops under way, nor of the routes of those without a shift.
  const asTheyStand = technician.stops
    .filter((stop) => held.has(stop.callId))
    .filter((stop) => isUnderWay(stop.state) || !mayBePlanned(technician))
    .map((stop): PlannedStop => ({
      callId: stop.callId,
      arriveAt: stop.arriveAt,
      startAt: stop.arriveAt,
      finishAt: stop.finishAt,
      driveMinutes: stop.driveMinutes,
      firm: true,
      because: stop.because,
    }));
  const reasons = new Map(answer?.reasons.map((reason) => [reason.job, reason]));
  const freeAt = Math.max(facts.now, asTheyStand.at(-1)?.finishAt ?? 0);
  const planned = routesOf(plan, technician.id).flatMap((route) => {
    let left = Math.max(seconds(freeAt), seconds(technician.shifts[route.shift]?.startsAt ?? 0));
    return route.stops.map((stop): PlannedStop => {
      const drive = (stop.arrive - left) / 60;
      left = stop.finish;
      return {
        callId: stop.job,
        arriveAt: stop.arrive * 1000,
        startAt: stop.start * 1000,
        finishAt: stop.finish * 1000,
        driveMinutes: Math.round(drive * 10) / 10,
        firm: held.has(stop.job),
        because: because(facts, stop.job, stop.finish * 1000, reasons.get(stop.job)),
      };
    });
  });
  return [...asTheyStand, ...planned];
}

const routesOf = (plan: Pick<Plan, 'routes'>, technicianId: string): PlanRoute[] =>
  plan.routes
    .filter((route) => route.technician === technicianId)
    .sort((a, b) => a.shift - b.shift);

/** The planner's reason; where it speaks of money, with the contents' own value and not the weighted. */
function because(
  facts: PlanFacts,
  callId: string,
  finishAt: Instant,
  reason: StopReason | undefined,
): string {
  const call = facts.calls.get(callId);
  if (!reason || !call) return 'On the plan.';
  if (reason.code !== 'save-by') return reason.words;
  const saved = savedOf(call, facts.now, finishAt);
  const first = Math.min(...saved.map(({ saveByAt }) => saveByAt ?? Infinity));
  const dollars = Math.round(sum(saved) / 100);
  const medicine = saved.some(({ kind }) => kind === 'medicine') ? ' with medicine' : '';
  return `Saves $${String(dollars)}${medicine}; done ${minutesInWords((first - finishAt) / MINUTE_MS)} before save-by.`;
}

function unplanned(facts: PlanFacts, plan: Pick<Plan, 'unassigned'>): PlanDto['unplanned'] {
  const hasTechnicians = facts.technicians.some(mayBePlanned);
  const held = new Set(
    facts.technicians.flatMap(({ stops }) =>
      stops.slice(0, heldCount(stops)).map((stop) => stop.callId),
    ),
  );
  const planners = new Map(plan.unassigned.map((one) => [one.job, one]));
  return [...facts.calls.values()]
    .filter((call) => isPlannable(call.state) && !held.has(call.id))
    .flatMap((call): PlanDto['unplanned'] => {
      if (!call.lonLat)
        return [
          { callId: call.id, reason: 'unlocated', words: 'Its place is not on the map yet.' },
        ];
      if (call.cutOff)
        return [
          {
            callId: call.id,
            reason: 'cut-off',
            words: 'Cut off: every road there is closed or flooded now.',
          },
        ];
      if (!hasTechnicians)
        return [
          {
            callId: call.id,
            reason: 'no-shift',
            words: 'Nobody has a shift in the next 24 hours.',
          },
        ];
      const left = planners.get(call.id);
      if (!left) return [];
      return [{ callId: call.id, reason: REASONS[left.reason], words: left.because }];
    });
}

/** The planner's reasons in the words of the wire. */
const REASONS: Readonly<Record<UnassignedReason, PlanDto['unplanned'][number]['reason']>> = {
  skill: 'skill',
  part: 'part',
  unreachable: 'cut-off',
  no_shift: 'no-shift',
  capacity: 'capacity',
};

/**
 * What a plan saves and costs. Contents count as saved when the visit is done before their save-by,
 * and as lost when they are not lost yet but will be. Stops under way count in every plan alike.
 */
function figuresOf(
  facts: PlanFacts,
  plan: Pick<Plan, 'routes'>,
  summary: PlanSummary | undefined,
): PlanFigures {
  const visits = [
    ...plan.routes.flatMap(({ stops }) =>
      stops.map((stop) => ({ callId: stop.job, finishAt: stop.finish * 1000 })),
    ),
    ...facts.technicians.flatMap((technician) =>
      technician.stops
        .slice(0, heldCount(technician.stops))
        .filter((stop) => isUnderWay(stop.state) || !mayBePlanned(technician)),
    ),
  ];
  const atStake = sum([...facts.calls.values()].flatMap((call) => notYetLost(call, facts.now)));
  const saved = sum(
    visits.flatMap(({ callId, finishAt }) => {
      const call = facts.calls.get(callId);
      return call ? savedOf(call, facts.now, finishAt) : [];
    }),
  );
  const { toOtherTechnician = [], toOtherTime = [] } = summary?.moved ?? {};
  return {
    savedCents: saved,
    lostCents: atStake - saved,
    driveMinutes: Math.round(summary?.driveMinutes ?? 0),
    driveMiles: Math.round((summary?.driveMiles ?? 0) * 10) / 10,
    lateMinutes: Math.round(summary?.lateMinutes ?? 0),
    stops: visits.length,
    moved: toOtherTechnician.length + toOtherTime.length,
  };
}

type AtStake = CallToPlan['compartments'];

/** Contents that no rule may call lost are at no stake that money could measure. */
const notYetLost = (call: CallToPlan, now: Instant): AtStake =>
  call.compartments.filter(({ saveByAt }) => saveByAt !== null && saveByAt > now);

const savedOf = (call: CallToPlan, now: Instant, finishAt: Instant): AtStake =>
  notYetLost(call, now).filter(({ saveByAt }) => saveByAt !== null && finishAt < saveByAt);

const sum = (compartments: AtStake): number =>
  compartments.reduce((cents, { valueCents }) => cents + valueCents, 0);
