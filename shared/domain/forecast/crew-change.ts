import { HOUR_MS, MINUTE_MS } from '../instant';
import type { WorkShift } from '../route-rules';
import { PARTS } from '../skills';
import type { ForecastFacts, ForecastTechnician } from './facts';
import type { Crew } from './played';

/** What a manager may want to try. Nothing is changed by asking. */
export interface CrewChange {
  /** More or fewer of them, with the shifts and vans of those there are. */
  readonly technicians: number;
  /** Hours that everybody stays longer. */
  readonly overtimeHours: number;
  /** Technicians who begin when the last of a day's shift stops. */
  readonly secondShift: number;
  readonly phoneStaff: number;
  /** So many more of each part on each van. */
  readonly partsOnEachVan: number;
}

export const NO_CHANGE: CrewChange = {
  technicians: 0,
  overtimeHours: 0,
  secondShift: 0,
  phoneStaff: 0,
  partsOnEachVan: 0,
};

/** How long a second shift is. Our estimate of a usual one. */
export const SECOND_SHIFT_HOURS = 8;
/** Shifts that begin further apart than this belong to two days. */
const ONE_DAYS_SHIFTS_MS = 8 * HOUR_MS;

/** Those who work, changed. Whoever leaves is the one with the fewest stops who is not at work on one. */
export function crewOf(facts: ForecastFacts, change: CrewChange = NO_CHANGE): Crew {
  const numbered = facts.technicians.map((technician, known) => ({ technician, known }));
  const working = numbered.filter(({ technician }) => technician.shifts.length > 0);
  const leaving = new Set(
    working
      .filter(({ technician }) => !technician.underWay)
      .sort((a, b) => a.technician.route.length - b.technician.route.length)
      .slice(0, Math.max(0, -change.technicians)),
  );
  const coming = [
    ...copies(working, change.technicians, ({ shifts }) => shifts),
    ...copies(working, change.secondShift, () => secondShifts(facts.technicians)),
  ];
  const all = [
    ...numbered.filter((one) => !leaving.has(one)),
    ...coming.map((technician) => ({ technician, known: -1 })),
  ];
  return {
    phoneStaff: Math.max(1, facts.phone.staff + change.phoneStaff),
    storeMs: facts.store ? facts.store.minutes * MINUTE_MS : null,
    technicians: all.map(({ technician }) => ({
      ...technician,
      shifts: longer(technician.shifts, change.overtimeHours),
      van: PARTS.map((_, part) => (technician.van[part] ?? 0) + change.partsOnEachVan),
    })),
    known: all.map(({ known }) => known),
  };
}

function copies(
  working: readonly { readonly technician: ForecastTechnician }[],
  count: number,
  shiftsOf: (technician: ForecastTechnician) => readonly WorkShift[],
): ForecastTechnician[] {
  if (working.length === 0) return [];
  return Array.from({ length: Math.max(0, count) }, (_, i) => {
    const { technician } = working[i % working.length]!;
    return {
      ...technician,
      id: `more-${String(i)}`,
      shifts: shiftsOf(technician),
      route: [],
      underWay: null,
    };
  });
}

/** From the end of each day's last shift on. */
function secondShifts(technicians: readonly ForecastTechnician[]): WorkShift[] {
  const all = technicians.flatMap(({ shifts }) => shifts).sort((a, b) => a.startsAt - b.startsAt);
  const days: { from: number; until: number }[] = [];
  for (const { startsAt, endsAt } of all) {
    const day = days.at(-1);
    if (day && startsAt - day.from < ONE_DAYS_SHIFTS_MS) day.until = Math.max(day.until, endsAt);
    else days.push({ from: startsAt, until: endsAt });
  }
  return days.map(({ until }, i) => ({
    startsAt: until,
    endsAt: Math.min(until + SECOND_SHIFT_HOURS * HOUR_MS, nextAfter(days, i, until)),
  }));
}

const nextAfter = (days: readonly { until: number }[], i: number, until: number): number =>
  Math.max(until, days[i + 1]?.until ?? Infinity);

/** Nobody works into the next of their own shifts twice. */
const longer = (shifts: readonly WorkShift[], hours: number): WorkShift[] =>
  shifts.map((shift, i) => ({
    ...shift,
    endsAt: Math.min(shift.endsAt + hours * HOUR_MS, shifts[i + 1]?.startsAt ?? Infinity),
  }));
