import type { PlanDto } from '@shared/contract/routes';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import type { StopReason } from '@shared/domain/planner/plan-summary';
import type { Plan, PlanRoute } from '@shared/domain/planner/problem';
import { heldCount, isUnderWay } from '@shared/domain/route-rules';
import { minutesInWords } from '@shared/domain/urgency';
import type { PlannerResponse } from '../workers/planner-client';
import type { PlanFacts, TechnicianToPlan } from './plan-facts';
import { centsOf, savedAt, savedOf } from './plan-figures';
import { mayBePlanned, type Problem } from './plan-problem';
import { KEPT_WORDS } from './plan-words';

type PlannedStop = PlanDto['routes'][number]['stops'][number];

/** The stops of a technician: those under way as they stand, and the planned ones with their reasons. */
export function stopsOf(
  technician: TechnicianToPlan,
  plan: Pick<Plan, 'routes'>,
  facts: PlanFacts,
  { kept }: Pick<Problem, 'kept'>,
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
  const drives = new Map(answer?.drives.map(({ job, seconds: drive }) => [job, drive]));
  const gains = new Map(answer?.gains.map(({ job, gain }) => [job, gain]));
  const planned = routesOf(plan, technician.id).flatMap((route) =>
    route.stops.map((stop, index): PlannedStop => {
      const why = kept.get(stop.job);
      const fetched = route.halts?.find((one) => one.kind === 'shop' && one.before === index);
      const gain = gains.get(stop.job);
      return {
        callId: stop.job,
        arriveAt: stop.arrive * 1000,
        startAt: stop.start * 1000,
        finishAt: stop.finish * 1000,
        driveMinutes: Math.round((drives.get(stop.job) ?? 0) / 6) / 10,
        firm: held.has(stop.job),
        because: why
          ? KEPT_WORDS[why]
          : because(facts, stop.job, stop.finish * 1000, reasons.get(stop.job)),
        ...(fetched ? { fetches: fetched.parts } : {}),
        ...(gain === undefined ? {} : { gainCents: Math.round(gain * 100) }),
      };
    }),
  );
  return [...asTheyStand, ...planned];
}

/** Breaks and the stop at the store. */
export function haltsOf(
  technician: TechnicianToPlan,
  plan: Pick<Plan, 'routes'>,
): Pick<PlanDto['routes'][number], 'halts'> {
  const halts = routesOf(plan, technician.id).flatMap((route) => route.halts ?? []);
  return halts.length === 0
    ? {}
    : {
        halts: halts.map(({ kind, start, finish }) => ({
          kind,
          startAt: start * 1000,
          finishAt: finish * 1000,
        })),
      };
}

/** A start that moves by less is the same promise: the planner's own measure. */
const SAME_START_MS = 30 * MINUTE_MS;

/** How many of a technician's stops in force are taken, moved in time or left out. */
export function changesOf(
  technician: TechnicianToPlan,
  plan: Pick<Plan, 'routes'>,
  { settings, calls }: PlanFacts,
): number {
  // Whoever works no more loses their stops whatever anybody plans.
  if (!mayBePlanned(technician)) return 0;
  const now = new Map(
    routesOf(plan, technician.id).flatMap(({ stops }) =>
      stops.map(({ job, arrive }) => [job, arrive * 1000] as const),
    ),
  );
  const sameMs = Math.max(SAME_START_MS, settings.otherTimeMinutes * MINUTE_MS);
  return technician.stops.slice(heldCount(technician.stops)).filter(({ callId, arriveAt }) => {
    const arrives = now.get(callId);
    // Whom nobody can drive to leaves every route; that is no choice of the planner's.
    if (arrives === undefined) return !calls.get(callId)?.cutOff;
    return Math.abs(arrives - arriveAt) > sameMs;
  }).length;
}

/** What one technician's route does. */
export function routeFigures(
  technician: TechnicianToPlan,
  stops: readonly PlannedStop[],
  facts: PlanFacts,
  answer: PlannerResponse | null,
): Pick<PlanDto['routes'][number], 'figures'> {
  const own = answer?.byTechnician.find((one) => one.technician === technician.id)?.summary;
  if (!own) return {};
  return {
    figures: {
      savedCents: centsOf(
        stops.flatMap(({ callId, finishAt }) => savedAt(facts, callId, finishAt)),
      ),
      driveMinutes: Math.round(own.driveMinutes),
      driveMiles: Math.round((own.driveMiles ?? 0) * 10) / 10,
      lateMinutes: Math.round(own.lateMinutes),
      overtimeMinutes: Math.round(own.overtimeMinutes),
    },
  };
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
  const dollars = Math.round(centsOf(saved) / 100);
  const medicine = saved.some(({ kind }) => kind === 'medicine') ? ' with medicine' : '';
  return `Saves $${String(dollars)}${medicine}; done ${minutesInWords((first - finishAt) / MINUTE_MS)} before save-by.`;
}
