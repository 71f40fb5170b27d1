import type { MilestoneKind } from './milestones';

/**
 * When a text may go out, by the clock of the place that the call is about.
 *
 * Source: 47 CFR 64.1200(c)(1): no telephone solicitation before 8 a.m. or after 9 p.m. at the
 * called party's location. An arrival text that the customer asked for is no solicitation; we keep
 * to the hours all the same unless a visit is on its way. Some states are stricter for marketing,
 * so a company may narrow the hours; it can never widen them.
 */
const FEDERAL_OPENS_AT_MINUTE = 8 * 60;
const FEDERAL_CLOSES_AT_MINUTE = 21 * 60;
const MINUTES_A_DAY = 24 * 60;

/** Minutes of the local day, 0 to 1439. Texts may go from `opensAtMinute` until just before `closesAtMinute`. */
export interface TextHours {
  readonly opensAtMinute: number;
  readonly closesAtMinute: number;
}

export const FEDERAL_TEXT_HOURS: TextHours = {
  opensAtMinute: FEDERAL_OPENS_AT_MINUTE,
  closesAtMinute: FEDERAL_CLOSES_AT_MINUTE,
};

/** The company's own hours, cut to the federal ones; hours that leave nothing become the federal ones. */
export function textHours(wanted: TextHours): TextHours {
  const opensAtMinute = Math.max(wanted.opensAtMinute, FEDERAL_OPENS_AT_MINUTE);
  const closesAtMinute = Math.min(wanted.closesAtMinute, FEDERAL_CLOSES_AT_MINUTE);
  return opensAtMinute < closesAtMinute ? { opensAtMinute, closesAtMinute } : FEDERAL_TEXT_HOURS;
}

/**
 * Which texts may pass in quiet hours: those about a visit that is on its way, and the one answer
 * that a STOP, HELP or START just asked for. (That answer has to come within minutes to count as
 * the confirmation of 47 CFR 64.1200(a)(12); "five minutes" is from memory.)
 */
const PASSES_QUIET_HOURS: Readonly<Record<MilestoneKind, boolean>> = {
  'call-received': false,
  'settled-by-phone': false,
  'on-the-way': true,
  'eta-moved': true,
  'stop-confirmed': true,
  'start-confirmed': true,
  help: true,
};

export const passesQuietHours = (kind: MilestoneKind): boolean => PASSES_QUIET_HOURS[kind];

/** Whether the minute of the local day lies inside the hours. */
export function isTextTime(minuteOfDay: number, hours: TextHours = FEDERAL_TEXT_HOURS): boolean {
  return minuteOfDay >= hours.opensAtMinute && minuteOfDay < hours.closesAtMinute;
}

export type TextPermission =
  | { readonly maySend: true }
  /** The next local minute at which it may go, today (`daysAhead` 0) or tomorrow (1). */
  | { readonly maySend: false; readonly minuteOfDay: number; readonly daysAhead: 0 | 1 };

/**
 * @param minuteOfDay local time at the call's place, whole minutes since midnight, 0 to 1439
 * @param kind what the text is about
 */
export function textPermission(
  minuteOfDay: number,
  kind: MilestoneKind,
  hours: TextHours = FEDERAL_TEXT_HOURS,
): TextPermission {
  const minute = ((minuteOfDay % MINUTES_A_DAY) + MINUTES_A_DAY) % MINUTES_A_DAY;
  if (passesQuietHours(kind) || isTextTime(minute, hours)) return { maySend: true };
  const daysAhead = minute < hours.opensAtMinute ? 0 : 1;
  return { maySend: false, minuteOfDay: hours.opensAtMinute, daysAhead };
}
