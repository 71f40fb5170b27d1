import type { PlanDto, PlanFigures } from '@shared/contract/routes';
import { isPlannable } from '@shared/domain/call-state';
import type { Instant } from '@shared/domain/instant';
import type { Plan, PlanRoute, UnassignedReason } from '@shared/domain/planner/problem';
import type { PlanSummary, StopReason } from '@shared/domain/planner/plan-summary';
import { heldCount, isUnderWay } from '@shared/domain/route-rules';
import type { Part } from '@shared/domain/skills';
import { toldWindow } from '@shared/domain/texts/eta-moved';
import { minutesInWords } from '@shared/domain/urgency';
import { MINUTE_MS } from '@shared/domain/instant';
import type { PlannerResponse } from '../workers/planner-client';
import type { CallToPlan, PlanFacts, TechnicianToPlan } from './plan-facts';
import { partsOfKit } from './part-kits';
import { mayBePlanned, type Problem } from './plan-problem';
import type { PlanBody } from './plan-rows';
import { KEPT_WORDS, unplannedWords, type Names } from './plan-words';

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

/** How much lower the price of the plan is than that of the routes in force; `null` when nothing was planned. */
export const gainOf = (answer: PlannerResponse | null): number | null =>
  answer?.before ? Math.round((answer.before.plan.cost - answer.plan.cost) * 100) : null;

const NOTHING: Pick<Plan, 'routes' | 'unassigned'> = { routes: [], unassigned: [] };

type PlannedStop = PlanDto['routes'][number]['stops'][number];

function stopsOf(
  technician: TechnicianToPlan,
  plan: Pick<Plan, 'routes'>,
  facts: PlanFacts,
  { kept }: Planned['problem'],
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
        ...(fetched ? { fetches: fetchedParts(fetched.parts ?? {}) } : {}),
        ...(gain === undefined ? {} : { gainCents: Math.round(gain * 100) }),
      };
    }),
  );
  return [...asTheyStand, ...planned];
}

/** The planner fetches whole repairs; people fetch parts. */
function fetchedParts(kits: Readonly<Record<string, number>>): Partial<Record<Part, number>> {
  const parts = new Map<Part, number>();
  for (const [kit, count] of Object.entries(kits))
    for (const part of partsOfKit(kit)) parts.set(part, (parts.get(part) ?? 0) + count);
  return Object.fromEntries(parts);
}

function haltsOf(
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
function changesOf(
  technician: TechnicianToPlan,
  plan: Pick<Plan, 'routes'>,
  { settings, calls }: PlanFacts,
): number {
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

function routeFigures(
  technician: TechnicianToPlan,
  stops: readonly PlannedStop[],
  facts: PlanFacts,
  answer: PlannerResponse | null,
): Pick<PlanDto['routes'][number], 'figures'> {
  const own = answer?.byTechnician.find((one) => one.technician === technician.id)?.summary;
  if (!own) return {};
  return {
    figures: {
      savedCents: sum(stops.flatMap(({ callId, finishAt }) => savedAt(facts, callId, finishAt))),
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
  const dollars = Math.round(sum(saved) / 100);
  const medicine = saved.some(({ kind }) => kind === 'medicine') ? ' with medicine' : '';
  return `Saves $${String(dollars)}${medicine}; done ${minutesInWords((first - finishAt) / MINUTE_MS)} before save-by.`;
}

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

/**
 * What a plan saves and costs. Contents count as saved when the visit is done before their save-by,
 * and as lost when they are not lost yet but will be. Stops under way count in every plan alike.
 */
function figuresOf(
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
  const atStake = sum([...facts.calls.values()].flatMap((call) => notYetLost(call, facts.now)));
  const saved = sum(visits.flatMap(({ callId, finishAt }) => savedAt(facts, callId, finishAt)));
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

const savedAt = (facts: PlanFacts, callId: string, finishAt: Instant): AtStake => {
  const call = facts.calls.get(callId);
  return call ? savedOf(call, facts.now, finishAt) : [];
};

type AtStake = CallToPlan['compartments'];

/** Contents that no rule may call lost are at no stake that money could measure. */
const notYetLost = (call: CallToPlan, now: Instant): AtStake =>
  call.compartments.filter(({ saveByAt }) => saveByAt !== null && saveByAt > now);

const savedOf = (call: CallToPlan, now: Instant, finishAt: Instant): AtStake =>
  notYetLost(call, now).filter(({ saveByAt }) => saveByAt !== null && finishAt < saveByAt);

const sum = (compartments: AtStake): number =>
  compartments.reduce((cents, { valueCents }) => cents + valueCents, 0);
