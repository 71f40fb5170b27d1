import { HOUR_MS, MINUTE_MS, type Instant } from './instant';

/** What the drain needs to know of one call. */
export interface DrainCall {
  readonly arrivedAt: Instant;
  /** When and how it was settled; both null while it is open. */
  readonly settledAt: Instant | null;
  readonly settledHow: 'phone' | 'visit' | null;
  readonly areaId: string | null;
  readonly technicianId: string | null;
  /** Leave the compartments of a duplicate out: its household counts once. */
  readonly compartments: readonly DrainCompartment[];
}

export interface DrainCompartment {
  readonly valueCents: number;
  /** From here the contents are lost unless cooling came back before; null is never. */
  readonly saveByAt: Instant | null;
  readonly restoredAt: Instant | null;
}

/**
 * Counts since the storm began. At every moment `arrivals = open + settledByPhone +
 * settledByVisit`, and at risk, saved and lost add up to the value of all calls that had arrived.
 */
export interface DrainTotals {
  readonly arrivals: number;
  readonly settledByPhone: number;
  readonly settledByVisit: number;
  readonly open: number;
  /** Neither saved nor lost yet, whether or not the call is settled. */
  readonly valueAtRiskCents: number;
  /** Cooling came back before save-by. */
  readonly savedCents: number;
  readonly lostCents: number;
}

export interface DrainPoint extends DrainTotals {
  readonly at: Instant;
}

export interface DrainGroup extends DrainTotals {
  /** null gathers the calls without an area, or without a technician. */
  readonly id: string | null;
}

/**
 * The backlog over time: a point before the first call, from which the curve rises, one at the end of
 * every bucket, and a last one at `now`. Buckets are counted from 00:00 UTC.
 */
export function drainSeries(
  calls: readonly DrainCall[],
  now: Instant,
  bucketMinutes: number,
): readonly DrainPoint[] {
  const events = eventsUntil(calls, now);
  const first = events[0];
  if (!first) return [{ at: now, ...NOTHING }];

  const bucket = bucketMinutes * MINUTE_MS;
  const series: DrainPoint[] = [];
  let totals = NOTHING;
  let next = 0;
  const closeAt = (at: Instant): void => {
    for (; next < events.length && events[next]!.at <= at; next++) {
      totals = add(totals, events[next]!.change);
    }
    series.push({ at, ...totals });
  };
  for (let at = Math.ceil(first.at / bucket) * bucket - bucket; at < now; at += bucket) closeAt(at);
  closeAt(now);
  return series;
}

export const drainTotals = (calls: readonly DrainCall[], now: Instant): DrainTotals =>
  eventsUntil(calls, now).reduce((totals, { change }) => add(totals, change), NOTHING);

export const drainByArea = (calls: readonly DrainCall[], now: Instant): readonly DrainGroup[] =>
  drainBy(({ areaId }) => areaId, calls, now);

export const drainByTechnician = (
  calls: readonly DrainCall[],
  now: Instant,
): readonly DrainGroup[] => drainBy(({ technicianId }) => technicianId, calls, now);

export interface DrainForecast {
  /** When no call will be open any more at the current rates; null is never at these rates. */
  readonly emptyAt: Instant | null;
  readonly arrivalsPerHour: number;
  readonly settledPerHour: number;
  /** Over which stretch before now the rates were counted. */
  readonly windowMinutes: number;
  readonly assumption: string;
}

/** Our estimate: long enough to smooth out single calls, short enough to follow a shift's change. */
export const DEFAULT_WINDOW_MINUTES = 120;

/** A younger storm than this is counted as if it were this old, so that one call makes no rate. */
const LEAST_WINDOW_MINUTES = 15;

/**
 * When the backlog will be empty if calls keep coming and being settled as they did in the window.
 * It knows nothing of the night, of shifts that end or of parts that run out.
 */
export function forecastEmpty(
  calls: readonly DrainCall[],
  now: Instant,
  windowMinutes: number = DEFAULT_WINDOW_MINUTES,
): DrainForecast {
  const arrived = calls.filter(({ arrivedAt }) => arrivedAt <= now);
  const settled = arrived.flatMap((call) => settlement(call, now) ?? []);
  const open = arrived.length - settled.length;

  const firstAt = arrived.reduce((least, { arrivedAt }) => Math.min(least, arrivedAt), now);
  const ageMinutes = Math.max(LEAST_WINDOW_MINUTES, (now - firstAt) / MINUTE_MS);
  const counted = Math.min(windowMinutes, ageMinutes);
  const isYoung = ageMinutes <= windowMinutes;
  const from = now - counted * MINUTE_MS;
  const isRecent = (at: Instant): boolean => isYoung || at > from;
  const perHour = (count: number): number => (count * 60) / counted;
  const arrivalsPerHour = perHour(arrived.filter(({ arrivedAt }) => isRecent(arrivedAt)).length);
  const settledPerHour = perHour(settled.filter(({ at }) => isRecent(at)).length);

  const hours = drainHours(open, settledPerHour, arrivalsPerHour);
  const rates =
    `${rounded(arrivalsPerHour)} calls an hour coming in and ${rounded(settledPerHour)} settled, ` +
    `as in the last ${Math.round(counted)} minutes`;
  return {
    emptyAt: hours === null ? null : Math.round(now + hours * HOUR_MS),
    arrivalsPerHour,
    settledPerHour,
    windowMinutes: counted,
    assumption: hours === null ? `Never at this rate: ${rates}` : `If it goes on with ${rates}`,
  };
}

/**
 * Hours until a backlog is empty, by the fluid rule: backlog / (outflow - inflow).
 *
 * The rule for a backlog, where Erlang C fails: in a storm the load exceeds the people.
 *
 * @returns null when nothing drains at these rates
 */
export function drainHours(
  backlog: number,
  outflowPerHour: number,
  inflowPerHour: number,
): number | null {
  if (backlog === 0) return 0;
  const drainPerHour = outflowPerHour - inflowPerHour;
  return drainPerHour > 0 ? backlog / drainPerHour : null;
}

const NOTHING: DrainTotals = {
  arrivals: 0,
  settledByPhone: 0,
  settledByVisit: 0,
  open: 0,
  valueAtRiskCents: 0,
  savedCents: 0,
  lostCents: 0,
};

interface DrainEvent {
  readonly at: Instant;
  readonly change: Partial<DrainTotals>;
}

/** Everything that had happened by `now`, in order. What lies after it is not known yet. */
function eventsUntil(calls: readonly DrainCall[], now: Instant): readonly DrainEvent[] {
  const events: DrainEvent[] = [];
  for (const call of calls) {
    if (call.arrivedAt > now) continue;
    events.push({ at: call.arrivedAt, change: { arrivals: 1, open: 1 } });
    const settled = settlement(call, now);
    if (settled) {
      const how = settled.how === 'phone' ? { settledByPhone: 1 } : { settledByVisit: 1 };
      events.push({ at: settled.at, change: { open: -1, ...how } });
    }
    for (const compartment of call.compartments) {
      events.push(...valueEvents(compartment, call.arrivedAt, now));
    }
  }
  return events.sort((a, b) => a.at - b.at);
}

/** A call cannot be settled before it arrived, whatever two clocks say. */
function settlement(
  { arrivedAt, settledAt, settledHow }: DrainCall,
  now: Instant,
): { readonly at: Instant; readonly how: 'phone' | 'visit' } | null {
  if (settledAt === null || settledHow === null || settledAt > now) return null;
  return { at: Math.max(arrivedAt, settledAt), how: settledHow };
}

/** The value comes in with its call, at risk, and leaves for saved or lost when that is decided. */
function valueEvents(
  { valueCents, saveByAt, restoredAt }: DrainCompartment,
  arrivedAt: Instant,
  now: Instant,
): DrainEvent[] {
  const events: DrainEvent[] = [{ at: arrivedAt, change: { valueAtRiskCents: valueCents } }];
  const isSaved = restoredAt !== null && (saveByAt === null || restoredAt < saveByAt);
  const decidedAt = isSaved ? restoredAt : saveByAt;
  if (decidedAt === null || decidedAt > now) return events;

  const kind = isSaved ? { savedCents: valueCents } : { lostCents: valueCents };
  const change = { valueAtRiskCents: -valueCents, ...kind };
  events.push({ at: Math.max(arrivedAt, decidedAt), change });
  return events;
}

function add(totals: DrainTotals, change: Partial<DrainTotals>): DrainTotals {
  return {
    arrivals: totals.arrivals + (change.arrivals ?? 0),
    settledByPhone: totals.settledByPhone + (change.settledByPhone ?? 0),
    settledByVisit: totals.settledByVisit + (change.settledByVisit ?? 0),
    open: totals.open + (change.open ?? 0),
    valueAtRiskCents: totals.valueAtRiskCents + (change.valueAtRiskCents ?? 0),
    savedCents: totals.savedCents + (change.savedCents ?? 0),
    lostCents: totals.lostCents + (change.lostCents ?? 0),
  };
}

/** Largest backlog first; the calls that belong to nobody last. */
function drainBy(
  groupOf: (call: DrainCall) => string | null,
  calls: readonly DrainCall[],
  now: Instant,
): readonly DrainGroup[] {
  const groups = new Map<string | null, DrainCall[]>();
  for (const call of calls) {
    if (call.arrivedAt > now) continue;
    const id = groupOf(call);
    const group = groups.get(id);
    if (group) group.push(call);
    else groups.set(id, [call]);
  }
  return [...groups]
    .map(([id, group]) => ({ id, ...drainTotals(group, now) }))
    .sort(
      (a, b) =>
        Number(a.id === null) - Number(b.id === null) ||
        b.open - a.open ||
        (a.id ?? '').localeCompare(b.id ?? ''),
    );
}

const rounded = (rate: number): number => Math.round(rate * 10) / 10;
