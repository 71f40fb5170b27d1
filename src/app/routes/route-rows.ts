import type { CallRow } from '@shared/contract/calls';
import type { PlanDto, StopDto, TechnicianDto } from '@shared/contract/routes';
import type { Instant } from '@shared/domain/instant';
import { isMovedBy } from './plan-comparison';
import { type SaveVerdict, saveVerdict, valuedFactsOf } from './save-verdict';

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
}

/** A stop of a proposal that nobody has published yet. */
export interface ProposedView {
  readonly callId: string;
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
}

/** One row for each technician at work or with stops: those on shift first, then by name. */
export function routeRows(facts: RouteFacts): RouteRow[] {
  const proposals = new Map(facts.plan?.routes.map((route) => [route.technicianId, route.stops]));
  const rows: RouteRow[] = [];
  for (const technician of facts.technicians.values()) {
    const stops = facts.routes.get(technician.id) ?? [];
    if (!technician.active && stops.length === 0) continue;
    const views = stops.map((stop) => stopView(stop, facts));
    rows.push({
      technician,
      stops: views,
      proposed: (proposals.get(technician.id) ?? []).map((stop) =>
        proposedView({ ...stop, technicianId: technician.id }, facts),
      ),
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
  };
}

function proposedView(
  stop: PlanDto['routes'][number]['stops'][number] & { readonly technicianId: string },
  { calls, stopOfCall, now }: RouteFacts,
): ProposedView {
  const call = calls.get(stop.callId);
  return {
    callId: stop.callId,
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
