import type { PlanFigures } from '@shared/contract/routes';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import type { PlanSummary } from '@shared/domain/planner/plan-summary';
import type { Plan } from '@shared/domain/planner/problem';
import { heldCount, isUnderWay } from '@shared/domain/route-rules';
import { toldWindow } from '@shared/domain/texts/eta-moved';
import type { PlannerResponse } from '../workers/planner-client';
import type { CallToPlan, PlanFacts } from './plan-facts';
import { mayBePlanned } from './plan-problem';

/** How much lower the price of the plan is than that of the routes in force; `null` when nothing was planned. */
export const gainOf = (answer: PlannerResponse | null): number | null =>
  answer?.before ? Math.round((answer.before.plan.cost - answer.plan.cost) * 100) : null;

/**
 * What a plan saves and costs. Contents count as saved when the visit is done before their save-by,
 * and as lost when they are not lost yet but will be. Stops under way count in every plan alike.
 */
export function figuresOf(
  facts: PlanFacts,
  plan: Pick<Plan, 'routes' | 'unassigned'>,
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
  const atStake = centsOf([...facts.calls.values()].flatMap((call) => notYetLost(call, facts.now)));
  const saved = centsOf(visits.flatMap(({ callId, finishAt }) => savedAt(facts, callId, finishAt)));
  const { toOtherTechnician = [], toOtherTime = [] } = summary?.moved ?? {};
  return {
    savedCents: saved,
    lostCents: atStake - saved,
    driveMinutes: Math.round(summary?.driveMinutes ?? 0),
    driveMiles: Math.round((summary?.driveMiles ?? 0) * 10) / 10,
    lateMinutes: Math.round((summary?.lateMinutes ?? 0) + lateUnderWay(facts)),
    overtimeMinutes: Math.round(summary?.overtimeMinutes ?? 0),
    waitHours: Math.round((summary?.waitHours ?? 0) * 10) / 10,
    leftOut: plan.unassigned.length,
    stops: visits.length,
    moved: toOtherTechnician.length + toOtherTime.length,
  };
}

/** Minutes by which those on the way come after what their customers were told. */
const lateUnderWay = ({ technicians }: PlanFacts): number =>
  technicians
    .flatMap(({ stops }) => stops)
    .reduce(
      (late, { state, toldEtaAt, arriveAt }) =>
        state === 'travelling' && toldEtaAt !== null
          ? late + Math.max(0, arriveAt - toldWindow(toldEtaAt).to) / MINUTE_MS
          : late,
      0,
    );

/** What of a call a visit saves that is done then. */
export const savedAt = (facts: PlanFacts, callId: string, finishAt: Instant): AtStake => {
  const call = facts.calls.get(callId);
  return call ? savedOf(call, facts.now, finishAt) : [];
};

type AtStake = CallToPlan['compartments'];

/** Contents that no rule may call lost are at no stake that money could measure. */
const notYetLost = (call: CallToPlan, now: Instant): AtStake =>
  call.compartments.filter(({ saveByAt }) => saveByAt !== null && saveByAt > now);

export const savedOf = (call: CallToPlan, now: Instant, finishAt: Instant): AtStake =>
  notYetLost(call, now).filter(({ saveByAt }) => saveByAt !== null && finishAt < saveByAt);

/** What contents are worth. */
export const centsOf = (compartments: AtStake): number =>
  compartments.reduce((cents, { valueCents }) => cents + valueCents, 0);
