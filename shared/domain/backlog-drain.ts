import { MINUTE_MS, type Instant } from './instant';

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
