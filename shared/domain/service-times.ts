import { MINUTE_MS, type Instant } from './instant';

/** A visit as it was made. */
export interface MeasuredVisit {
  readonly technicianId: string;
  /** The likeliest cause when it began, by any name; `null` when nothing was known. */
  readonly cause: string | null;
  /** Cold units of the call. */
  readonly units: number;
  readonly arrivedAt: Instant;
  readonly endedAt: Instant;
  /** Somebody let the technician in. */
  readonly hadAccess: boolean;
}

/** What the settings say of a visit. */
export interface ServiceSettings {
  readonly serviceMinutes: number;
  readonly furtherUnitPercent: number;
}

export interface ServiceFactor {
  readonly visits: number;
  /** Times what was expected. */
  readonly factor: number;
}

export interface LearnedService {
  readonly visits: number;
  readonly all: ServiceFactor;
  readonly byCause: ReadonlyMap<string, ServiceFactor>;
  readonly byTechnician: ReadonlyMap<string, ServiceFactor>;
}

/** Shorter is a slip of the finger, longer a forgotten phone: our bounds. */
export const SHORTEST_VISIT_MS = 5 * MINUTE_MS;
export const LONGEST_VISIT_MS = 5 * 60 * MINUTE_MS;
/** As many real visits move a figure half way from what was expected: our estimate. */
const PRIOR_VISITS = 8;
/** One odd visit counts for no more than this many times what was expected, or as little: our bound. */
const MOST_TIMES = 3;
/** No cause and no person is planned beyond these, whatever a few visits say: our bounds. */
export const CAUSE_BOUNDS = [0.5, 2] as const;
export const TECHNICIAN_BOUNDS = [0.75, 1.35] as const;

/** Whether a visit tells anything about times; why not, in words. */
export function visitFault({ arrivedAt, endedAt, hadAccess }: MeasuredVisit): string | null {
  const took = endedAt - arrivedAt;
  if (!hadAccess) return 'nobody let the technician in';
  if (!(took >= SHORTEST_VISIT_MS)) return 'shorter than 5 minutes';
  if (took > LONGEST_VISIT_MS) return 'longer than 5 hours';
  return null;
}

/** Minutes of work at a door, for a technician nobody knows anything of. */
export const expectedMinutes = (
  { serviceMinutes, furtherUnitPercent }: ServiceSettings,
  units: number,
): number => serviceMinutes * (1 + (Math.max(1, units) - 1) * (furtherUnitPercent / 100));

/**
 * How much longer or shorter visits took than the settings say: all of them, those with one likely
 * cause beside all, and those of one technician beside their causes. Each is a mean of ratios, drawn to 1
 * as if some visits had taken just as long as expected, and bounded; so a first visit moves little, and a
 * technician with the hard causes is not taken for a slow one.
 *
 * @param visits in any order; those that tell nothing are left out
 */
export function learnedService(
  visits: readonly MeasuredVisit[],
  settings: ServiceSettings,
): LearnedService {
  const counted = visits
    .filter((visit) => visitFault(visit) === null)
    .map((visit) => ({
      ...visit,
      times: (visit.endedAt - visit.arrivedAt) / MINUTE_MS / expectedMinutes(settings, visit.units),
    }))
    // Sums of floating point numbers depend on their order; the result must not.
    .sort((a, b) => a.times - b.times);
  const all = factorOf(
    counted.map(({ times }) => times),
    CAUSE_BOUNDS,
  );
  const byCause = grouped(
    counted,
    ({ cause }) => cause,
    CAUSE_BOUNDS,
    () => all.factor,
  );
  const byTechnician = grouped(
    counted,
    ({ technicianId }) => technicianId,
    TECHNICIAN_BOUNDS,
    ({ cause }) => all.factor * (byCause.get(cause ?? '')?.factor ?? 1),
  );
  return { visits: counted.length, all, byCause, byTechnician };
}

/** Whole minutes that a visit is planned for. */
export function serviceMinutesOf(
  visit: { readonly cause: string | null; readonly units: number; readonly technicianId?: string },
  settings: ServiceSettings,
  learned: LearnedService | null,
): number {
  const expected = expectedMinutes(settings, visit.units);
  if (!learned) return Math.round(expected);
  const cause = learned.byCause.get(visit.cause ?? '')?.factor ?? 1;
  const technician = learned.byTechnician.get(visit.technicianId ?? '')?.factor ?? 1;
  return Math.round(expected * bounded(learned.all.factor * cause, CAUSE_BOUNDS) * technician);
}

function grouped<Visit extends { readonly times: number }>(
  visits: readonly Visit[],
  keyOf: (visit: Visit) => string | null,
  bounds: readonly [number, number],
  expected: (visit: Visit) => number,
): ReadonlyMap<string, ServiceFactor> {
  const times = new Map<string, number[]>();
  for (const visit of visits) {
    const key = keyOf(visit);
    if (key === null) continue;
    times.set(key, [...(times.get(key) ?? []), visit.times / expected(visit)]);
  }
  return new Map([...times].map(([key, ratios]) => [key, factorOf(ratios, bounds)]));
}

function factorOf(times: readonly number[], bounds: readonly [number, number]): ServiceFactor {
  const sum = times.reduce((total, one) => total + bounded(one, [1 / MOST_TIMES, MOST_TIMES]), 0);
  const factor = (PRIOR_VISITS + sum) / (PRIOR_VISITS + times.length);
  return { visits: times.length, factor: bounded(factor, bounds) };
}

const bounded = (value: number, [least, most]: readonly [number, number]): number =>
  Math.min(Math.max(value, least), most);
