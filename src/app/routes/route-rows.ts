import type { CallRow } from '@shared/contract/calls';
import type { PlanDto, StopDto, TechnicianDto } from '@shared/contract/routes';
import { type Instant, MINUTE_MS } from '@shared/domain/instant';
import { duration } from '../core/zone';
import { isMovedBy } from './plan-comparison';
import { type Halt, haltsOf } from './route-halts';
import { type SaveVerdict, saveVerdict, valuedFactsOf } from './save-verdict';
import { isUnderWay } from './stop-words';

/** A stop of the routes in force, with what the screen needs to say of it. */
export interface StopView {
  readonly stop: StopDto;
  readonly call: CallRow | null;
  readonly number: string;
  /** The arrival that the customer was told, else the one that was worked out. */
  readonly arriveAt: Instant;
  readonly finishAt: Instant;
  readonly driveMinutes: number;
  readonly verdict: SaveVerdict | null;
  /** Behind what the customer was promised, or behind its own time; `null` when neither. */
  readonly late: Lateness | null;
}

export interface Lateness {
  /** "+25", in minutes. */
  readonly short: string;
  readonly words: string;
}

/** A stop of a proposal that nobody has published yet. */
export interface ProposedView {
  readonly callId: string;
  readonly call: CallRow | null;
  readonly number: string;
  readonly arriveAt: Instant;
  readonly finishAt: Instant;
  readonly driveMinutes: number;
  readonly because: string;
  /** Against the routes in force. */
  readonly change: 'none' | 'new' | 'moved';
  readonly verdict: SaveVerdict | null;
}

export interface RouteRow {
  readonly technician: TechnicianDto;
  readonly stops: readonly StopView[];
  readonly proposed: readonly ProposedView[];
  /** Breaks and stops at the store between the stops in force, and between those proposed. */
  readonly halts: readonly Halt[];
  readonly proposedHalts: readonly Halt[];
  /** Stops in force that come too late for all that can still be saved there. */
  readonly tooLate: number;
  readonly driveMinutes: number;
  readonly isOnShift: boolean;
}

export interface RouteFacts {
  readonly technicians: ReadonlyMap<string, TechnicianDto>;
  readonly routes: ReadonlyMap<string, readonly StopDto[]>;
  readonly calls: ReadonlyMap<string, CallRow>;
  readonly stopOfCall: ReadonlyMap<string, StopDto>;
  /** The proposal that is compared; `null` when none is. */
  readonly plan: PlanDto | null;
  readonly now: Instant;
  /** How long a stop at the store takes, as it is set. */
  readonly shopMinutes: number;
}

/** One row for each technician at work or with stops: those on shift first, then by name. */
export function routeRows(facts: RouteFacts): RouteRow[] {
  const proposals = new Map(facts.plan?.routes.map((route) => [route.technicianId, route]));
  const rows: RouteRow[] = [];
  for (const technician of facts.technicians.values()) {
    const stops = facts.routes.get(technician.id) ?? [];
    if (!technician.active && stops.length === 0) continue;
    const views = stops.map((stop) => stopView(stop, facts));
    rows.push({
      technician,
      stops: views,
      proposed: (proposals.get(technician.id)?.stops ?? []).map((stop) =>
        proposedView({ ...stop, technicianId: technician.id }, facts),
      ),
      halts: haltsOf(technician.shifts, views.map(haltedStop), facts.now, facts.shopMinutes),
      proposedHalts: proposals.get(technician.id)?.halts ?? [],
      tooLate: views.filter(({ verdict }) => verdict?.kind === 'too-late').length,
      driveMinutes: views.reduce((sum, view) => sum + view.driveMinutes, 0),
      isOnShift: technician.active && isOnShift(technician, facts.now),
    });
  }
  return rows.sort(
    (a, b) =>
      Number(b.isOnShift) - Number(a.isOnShift) ||
      a.technician.name.localeCompare(b.technician.name) ||
      a.technician.id.localeCompare(b.technician.id),
  );
}

export const isOnShift = ({ shifts }: TechnicianDto, now: Instant): boolean =>
  shifts.some((shift) => shift.startsAt <= now && now < shift.endsAt);

/** The next shift that begins after now, of anybody. */
export function nextShift(
  technicians: Iterable<TechnicianDto>,
  now: Instant,
): { readonly name: string; readonly startsAt: Instant } | null {
  let next: { readonly name: string; readonly startsAt: Instant } | null = null;
  for (const { active, name, shifts } of technicians) {
    if (!active) continue;
    for (const { startsAt } of shifts) {
      if (startsAt > now && (next === null || startsAt < next.startsAt)) next = { name, startsAt };
    }
  }
  return next;
}

function stopView(stop: StopDto, { calls, now }: RouteFacts): StopView {
  const call = calls.get(stop.callId) ?? null;
  const arriveAt = stop.state === 'travelling' ? (stop.etaAt ?? stop.arriveAt) : stop.arriveAt;
  // A corrected arrival moves the end of the visit with it.
  const finishAt = Math.max(stop.finishAt + (arriveAt - stop.arriveAt), arriveAt);
  return {
    stop,
    call,
    number: call ? String(call.number) : '?',
    arriveAt,
    finishAt,
    driveMinutes: stop.driveMinutes,
    verdict: call && saveVerdict(valuedFactsOf(call), finishAt, now),
    late: lateness(stop, arriveAt, call?.window?.to ?? null, now),
  };
}

const haltedStop = ({ stop, arriveAt, finishAt, driveMinutes }: StopView) => ({
  arriveAt,
  finishAt,
  driveMinutes,
  isUnderWay: isUnderWay(stop),
  fetches: stop.fetches !== undefined,
});

/** Less is no news: arrivals are rounded, and who parks the van is not late. */
const LEAST_LATE_MS = 5 * MINUTE_MS;

function lateness(
  { state }: StopDto,
  arriveAt: Instant,
  windowEnds: Instant | null,
  now: Instant,
): Lateness | null {
  const arrival = state === 'on-site' ? arriveAt : Math.max(arriveAt, now);
  const behindPromise = windowEnds === null ? 0 : arrival - windowEnds;
  if (behindPromise >= MINUTE_MS)
    return late(behindPromise, 'after the end of the window that the customer agreed to');
  const overdue = arrival - arriveAt;
  return overdue >= LEAST_LATE_MS ? late(overdue, 'behind its own time already') : null;
}

const late = (ms: number, than: string): Lateness => ({
  short: `+${Math.floor(ms / MINUTE_MS)} min`,
  words: `${duration(ms)} ${than}`,
});

function proposedView(
  stop: PlanDto['routes'][number]['stops'][number] & { readonly technicianId: string },
  { calls, stopOfCall, now }: RouteFacts,
): ProposedView {
  const call = calls.get(stop.callId);
  return {
    callId: stop.callId,
    call: call ?? null,
    number: call ? String(call.number) : '?',
    arriveAt: stop.arriveAt,
    finishAt: stop.finishAt,
    driveMinutes: stop.driveMinutes,
    because: stop.because,
    change: changeOf(stop, stopOfCall.get(stop.callId)),
    verdict: call ? saveVerdict(valuedFactsOf(call), stop.finishAt, now) : null,
  };
}

const changeOf = (
  stop: { readonly technicianId: string; readonly arriveAt: Instant },
  was: StopDto | undefined,
): ProposedView['change'] => {
  if (!was) return 'new';
  return isMovedBy(stop, was) ? 'moved' : 'none';
};
