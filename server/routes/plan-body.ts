import type { PlanDto } from '@shared/contract/routes';
import { isPlannable } from '@shared/domain/call-state';
import type { Plan, UnassignedReason } from '@shared/domain/planner/problem';
import { heldCount } from '@shared/domain/route-rules';
import type { PlannerResponse } from '../workers/planner-client';
import type { PlanFacts } from './plan-facts';
import { figuresOf, gainOf } from './plan-figures';
import { mayBePlanned, type Problem } from './plan-problem';
import { changesOf, haltsOf, routeFigures, stopsOf } from './plan-route-body';
import type { PlanBody } from './plan-rows';
import { unplannedWords, type Names } from './plan-words';

export interface Planned {
  readonly facts: PlanFacts;
  readonly problem: Pick<Problem, 'kept'>;
  /** `null` when there was nothing to ask: no calls, or nobody at work. */
  readonly answer: PlannerResponse | null;
}

/** The planner's answer in the words and the money of the board. */
export function planBody({ facts, problem, answer }: Planned, names: Names): PlanBody {
  const plan = answer?.plan ?? NOTHING;
  const before = answer?.before?.plan ?? NOTHING;
  const gainCents = gainOf(answer);
  return {
    ...(answer ? { drivesFrom: answer.source } : {}),
    ...(gainCents === null ? {} : { gainCents }),
    routes: facts.technicians.flatMap((technician) => {
      const stops = stopsOf(technician, plan, facts, problem, answer);
      const changes = changesOf(technician, plan, facts);
      if (stops.length === 0 && changes === 0) return [];
      return [
        {
          technicianId: technician.id,
          stops,
          ...haltsOf(technician, plan),
          ...routeFigures(technician, stops, facts, answer),
          changes,
        },
      ];
    }),
    unplanned: unplanned(facts, plan, answer, names),
    ...compared({ facts, answer, plan, before }),
  };
}

/** The figures of a plan beside those of the routes in force. */
export const figuresBeside = ({
  facts,
  answer,
}: Omit<Planned, 'problem'>): Pick<PlanBody, 'figures' | 'inForce'> =>
  compared({
    facts,
    answer,
    plan: answer?.plan ?? NOTHING,
    before: answer?.before?.plan ?? NOTHING,
  });

const compared = ({
  facts,
  answer,
  plan,
  before,
}: Omit<Planned, 'problem'> & {
  readonly plan: Pick<Plan, 'routes' | 'unassigned'>;
  readonly before: Pick<Plan, 'routes' | 'unassigned'>;
}): Pick<PlanBody, 'figures' | 'inForce'> => ({
  figures: figuresOf(facts, plan, answer?.summary),
  inForce: figuresOf(facts, before, answer?.before?.summary),
});

const NOTHING: Pick<Plan, 'routes' | 'unassigned'> = { routes: [], unassigned: [] };

function unplanned(
  facts: PlanFacts,
  plan: Pick<Plan, 'unassigned'>,
  answer: PlannerResponse | null,
  names: Names,
): PlanDto['unplanned'] {
  const whys = new Map(answer?.unplanned.map((why) => [why.job, why]));
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
      return [
        {
          callId: call.id,
          reason: REASONS[left.reason],
          ...unplannedWords(left, whys.get(call.id), names),
        },
      ];
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
