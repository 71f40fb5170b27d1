/** What a queue of callers looks like with a given number of people on the phones. */
export interface PhoneService {
  /** Share of the time that each of them speaks; 1 and more: the line grows without end. */
  readonly occupancy: number;
  /** Chance that a caller has to wait at all, 0 to 1. */
  readonly waitChance: number;
  /** Mean wait of all callers in seconds; null when the line grows without end. */
  readonly meanWaitSeconds: number | null;
}

/**
 * The chance that a caller finds all `staff` people busy (Erlang C).
 *
 * @param load calls an hour times hours a call, in erlangs
 *
 * Source: A. K. Erlang's formula as in ITU-D Study Group 2, "Teletraffic Engineering Handbook" (from
 * memory, sections 7.2 and 9.2): first Erlang B by its recursion, which stays between 0 and 1 for any
 * load, where factorials and powers would overflow.
 */
export function erlangC(load: number, staff: number): number {
  if (load <= 0) return 0;
  if (staff <= load) return 1;
  let blocked = 1;
  for (let people = 1; people <= staff; people++) {
    blocked = (load * blocked) / (people + load * blocked);
  }
  return (staff * blocked) / (staff - load * (1 - blocked));
}

/**
 * Waits in a queue that nobody leaves. In truth callers hang up, so that it is too gloomy where it is
 * gloomy at all; and it holds for a rate that goes on, not for the backlog of a storm's morning.
 */
export function phoneService(
  callsPerHour: number,
  handleMinutes: number,
  staff: number,
): PhoneService {
  const load = (callsPerHour * handleMinutes) / 60;
  const occupancy = staff > 0 ? load / staff : load > 0 ? Infinity : 0;
  const waitChance = erlangC(load, staff);
  const meanWaitSeconds =
    load === 0 ? 0 : occupancy >= 1 ? null : (waitChance * handleMinutes * 60) / (staff - load);
  return { occupancy, waitChance, meanWaitSeconds };
}

/** The share of callers who are answered within so many seconds, 0 to 1. */
export function answeredWithin(
  seconds: number,
  callsPerHour: number,
  handleMinutes: number,
  staff: number,
): number {
  const load = (callsPerHour * handleMinutes) / 60;
  if (load === 0) return 1;
  if (staff <= load) return 0;
  const leaving = ((staff - load) * seconds) / (handleMinutes * 60);
  return 1 - erlangC(load, staff) * Math.exp(-leaving);
}
