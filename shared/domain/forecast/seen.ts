import { isOpen, PHONE_OUTCOMES, type CallState } from '../call-state';
import { HOUR_MS, MINUTE_MS, type Instant } from '../instant';
import type { ForecastFacts } from './facts';

/** One change of a call's state, as its history keeps it. */
export interface StateChange {
  readonly at: Instant;
  readonly from: CallState | null;
  readonly to: CallState;
  /** Who did it; null is a machine. */
  readonly by: string | null;
}

/** A visit that is over. */
export interface DoneVisit {
  readonly technicianId: string;
  readonly drivingSince: Instant | null;
  readonly arrivedAt: Instant;
  readonly endedAt: Instant;
}

/** A check that stood open longer than this was left and come back to. Our estimate. */
const LONGEST_CHECK_MINUTES = 60;
/** Between two visits further apart than this lay a pause and no drive. Our estimate. */
const LONGEST_DRIVE_MINUTES = 120;
/** Whoever has worked on a call within this time is on the phones. Our estimate. */
const ON_THE_PHONES_MS = 2 * HOUR_MS;

const BY_PHONE: ReadonlySet<CallState> = new Set(PHONE_OUTCOMES);
const ON_PHONE: ReadonlySet<CallState | null> = new Set([null, 'new', 'checking']);
const IN_LINE: ReadonlySet<CallState | null> = new Set([
  'waiting',
  'planned',
  'offered',
  'accepted',
]);

type Seen = Pick<ForecastFacts, 'waiting'> & {
  readonly phone: Omit<ForecastFacts['phone'], 'staff'> & { readonly people: number };
  readonly outcomes: Pick<
    ForecastFacts['visits'],
    'restored' | 'settledOtherwise' | 'noAccess' | 'partsOnOrder'
  >;
};

/** What the histories of a storm's calls tell of the phone, of waiting and of visits. */
export function seenOf(histories: Iterable<readonly StateChange[]>, now: Instant): Seen {
  const phone = { settledRunning: 0, settledOtherwise: 0, toVisit: 0 };
  const outcomes = { restored: 0, settledOtherwise: 0, noAccess: 0, partsOnOrder: 0 };
  const handleMinutes: number[] = [];
  const people = new Set<string>();
  let ended = 0;
  let waitedMs = 0;

  for (const history of histories) {
    let checkingSince: Instant | null = null;
    history.forEach(({ at, from, to, by }, i) => {
      const isPhoneWork = ON_PHONE.has(from);
      if (by !== null && isPhoneWork && at > now - ON_THE_PHONES_MS) people.add(by);
      if (to === 'checking') checkingSince = at;
      else if (isPhoneWork && to !== 'new') {
        if (checkingSince !== null) {
          const minutes = (at - checkingSince) / MINUTE_MS;
          if (minutes > 0 && minutes <= LONGEST_CHECK_MINUTES) handleMinutes.push(minutes);
        }
        checkingSince = null;
        if (to === 'waiting') phone.toVisit++;
        else if (to === 'running-again') phone.settledRunning++;
        else if (BY_PHONE.has(to)) phone.settledOtherwise++;
      } else if (from === 'on-site') {
        if (to === 'restored') outcomes.restored++;
        else if (to === 'no-access') outcomes.noAccess++;
        else if (to === 'parts-on-order') outcomes.partsOnOrder++;
        else outcomes.settledOtherwise++;
      } else if (IN_LINE.has(from) && BY_PHONE.has(to)) ended++;
      if (IN_LINE.has(to)) waitedMs += (history[i + 1]?.at ?? now) - at;
    });
  }
  return {
    phone: { ...phone, handleMinutes, people: people.size },
    waiting: { ended, hours: waitedMs / HOUR_MS },
    outcomes,
  };
}

/**
 * Minutes from door to door and at the door. A drive counts from the end of the visit before, for that
 * is what the day loses; after a pause, from when the technician set off.
 */
export function visitTimes(visits: readonly DoneVisit[]): {
  readonly driveMinutes: readonly number[];
  readonly serviceMinutes: readonly number[];
} {
  const driveMinutes: number[] = [];
  const serviceMinutes: number[] = [];
  const lastEnd = new Map<string, Instant>();
  for (const visit of [...visits].sort((a, b) => a.arrivedAt - b.arrivedAt)) {
    const before = lastEnd.get(visit.technicianId);
    const sinceLast = before === undefined ? Infinity : (visit.arrivedAt - before) / MINUTE_MS;
    const driven =
      sinceLast <= LONGEST_DRIVE_MINUTES
        ? sinceLast
        : (visit.arrivedAt - (visit.drivingSince ?? visit.arrivedAt)) / MINUTE_MS;
    if (driven > 0) driveMinutes.push(driven);
    const served = (visit.endedAt - visit.arrivedAt) / MINUTE_MS;
    if (served > 0) serviceMinutes.push(served);
    lastEnd.set(visit.technicianId, visit.endedAt);
  }
  return { driveMinutes, serviceMinutes };
}

/** Where an open call stands for the forecast; null when it is settled. */
export function stageOf(
  state: CallState,
): 'phone' | 'visit' | 'parts-on-order' | 'no-access' | null {
  if (!isOpen(state)) return null;
  if (state === 'parts-on-order' || state === 'no-access') return state;
  return ON_PHONE.has(state) ? 'phone' : 'visit';
}
