import type { CompartmentKind } from '@shared/domain/cold-unit';
import { COMPARTMENT_KINDS } from '@shared/domain/cold-unit';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';

/**
 * The ruler of every cold strip, in hours from now. It is the same in every row and on every
 * screen, so that rows under each other can be compared. Between two folds it is even; the next
 * twelve hours get as much room as the day and a half after them, because that is where a
 * dispatcher still decides.
 */
const FOLDS: readonly { readonly hours: number; readonly share: number }[] = [
  { hours: -8, share: 0 },
  { hours: 0, share: 0.14 },
  { hours: 12, share: 0.6 },
  { hours: 48, share: 1 },
];

export const RULER_FROM_HOURS = -8;
export const RULER_TO_HOURS = 48;

/** Where "now" stands on every ruler, as a share of its width. */
export const NOW_SHARE = 0.14;

/** Where the ruler changes its scale, as a share of its width. */
export const FOLD_SHARE = 0.6;

/** The hours that the ruler draws a line for; those with a label have it in `RULER_LABELS`. */
export const RULER_HOURS: readonly number[] = [
  -6, -4, -2, 0, 1, 2, 3, 4, 6, 8, 10, 12, 18, 24, 36, 48,
];

export const RULER_LABELS: readonly { readonly hours: number; readonly text: string }[] = [
  { hours: -4, text: '−4' },
  { hours: 0, text: 'now' },
  { hours: 2, text: '2' },
  { hours: 4, text: '4' },
  { hours: 8, text: '8' },
  { hours: 12, text: '12' },
  { hours: 24, text: '24' },
  { hours: 36, text: '36' },
  { hours: 48, text: '48 h' },
];

/** Where a number of hours from now stands, from 0 (left end) to 1; outside the ruler it stays at the end. */
export function shareOfHours(hours: number): number {
  if (hours <= RULER_FROM_HOURS) return 0;
  for (let i = 1; i < FOLDS.length; i++) {
    const left = FOLDS[i - 1];
    const right = FOLDS[i];
    if (!left || !right || hours > right.hours) continue;
    const part = (hours - left.hours) / (right.hours - left.hours);
    return left.share + part * (right.share - left.share);
  }
  return 1;
}

export const shareOf = (at: Instant, now: Instant): number => shareOfHours((at - now) / HOUR_MS);

export interface StripCompartment {
  readonly kind: CompartmentKind;
  readonly atRiskAt: Instant;
  /** From when they have likely passed their temperature; left out where nobody has worked it out. */
  readonly likelyAt?: Instant | null;
  /** `null`: no published hour says that these contents are lost. */
  readonly saveByAt: Instant | null;
}

export interface StripFacts {
  readonly lostAt: Instant;
  readonly restoredAt: Instant | null;
  readonly compartments: readonly StripCompartment[];
}

/** `stopped`: cooling came back before the save-by, so the clock stands still. */
export type StripState = 'still-safe' | 'at-risk' | 'lost' | 'stopped';

/** What one lane of a strip draws. All places are shares of the ruler's width. */
export interface StripLane {
  readonly kind: CompartmentKind;
  readonly state: StripState;
  /** How many compartments of this kind the lane stands for. */
  readonly count: number;
  readonly saveByAt: Instant | null;
  readonly atRiskAt: Instant;
  /** The thin line: cold, as far as published limits go. */
  readonly coldFrom: number;
  readonly coldTo: number;
  /** The hatched span: at risk until the tick. */
  readonly riskFrom: number;
  readonly riskTo: number;
  /** From when the contents are likely warm, if that is told apart from the save-by; and where it stands. */
  readonly likelyAt: Instant | null;
  readonly likely: number | null;
  /** Where the tick stands; `null` when there is no save-by to draw. */
  readonly tick: number | null;
  /** The save-by lies outside the ruler on this side. */
  readonly beyond: 'before' | 'after' | null;
}

export function stripState(
  { atRiskAt, saveByAt }: StripCompartment,
  restoredAt: Instant | null,
  now: Instant,
): StripState {
  const at = restoredAt === null ? now : Math.min(now, restoredAt);
  // Cooling does not answer for contents that no published hour speaks of: they stay set apart.
  if (saveByAt === null) return now >= atRiskAt ? 'at-risk' : 'still-safe';
  if (at >= saveByAt) return 'lost';
  if (restoredAt !== null && restoredAt <= now) return 'stopped';
  return at >= atRiskAt ? 'at-risk' : 'still-safe';
}

/** One lane for each compartment, in the order given: for a strip with room for all of them. */
export function lanesOfEach(facts: StripFacts, now: Instant): StripLane[] {
  return facts.compartments.map((compartment) => laneOf(compartment, 1, facts, now));
}

/**
 * One lane for each kind of compartment that the call has, always in the same order. A lane tells
 * of the compartment of its kind that is lost next; of the last one lost when none is left.
 */
export function lanesByKind(facts: StripFacts, now: Instant): StripLane[] {
  const lanes: StripLane[] = [];
  for (const kind of COMPARTMENT_KINDS) {
    const ofKind = facts.compartments.filter((compartment) => compartment.kind === kind);
    const shown = mostPressing(ofKind, facts.restoredAt, now);
    if (shown) lanes.push(laneOf(shown, ofKind.length, facts, now));
  }
  return lanes;
}

function mostPressing(
  compartments: readonly StripCompartment[],
  restoredAt: Instant | null,
  now: Instant,
): StripCompartment | undefined {
  const live = compartments.filter((each) => stripState(each, restoredAt, now) !== 'lost');
  const end = (each: StripCompartment) => each.saveByAt ?? Number.POSITIVE_INFINITY;
  if (live.length > 0) return live.reduce((a, b) => (end(b) < end(a) ? b : a));
  return compartments.reduce<StripCompartment | undefined>(
    (a, b) => (a && end(a) >= end(b) ? a : b),
    undefined,
  );
}

function laneOf(
  compartment: StripCompartment,
  count: number,
  { lostAt, restoredAt }: StripFacts,
  now: Instant,
): StripLane {
  const { kind, atRiskAt, saveByAt } = compartment;
  const state = stripState(compartment, restoredAt, now);
  // A stopped clock draws no future: the line ends where cooling came back.
  const end = state === 'stopped' && restoredAt !== null ? restoredAt : saveByAt;
  const riskTo = end === null ? 1 : shareOf(end, now);
  const riskFrom = Math.min(shareOf(Math.max(atRiskAt, lostAt), now), riskTo);
  return {
    kind,
    state,
    count,
    saveByAt,
    atRiskAt,
    coldFrom: Math.min(shareOf(lostAt, now), riskFrom),
    coldTo: riskFrom,
    riskFrom,
    riskTo,
    likelyAt: likelyOf(compartment, state),
    likely: likelyShare(likelyOf(compartment, state), now),
    tick: saveByAt === null ? null : shareOf(saveByAt, now),
    beyond: saveByAt === null ? null : sideBeyond((saveByAt - now) / HOUR_MS),
  };
}

/** Closer to the save-by than this the two are one mark. */
const TOLD_APART_MS = 15 * MINUTE_MS;

function likelyOf(
  { likelyAt = null, saveByAt }: StripCompartment,
  state: StripState,
): Instant | null {
  if (likelyAt === null || saveByAt === null || state === 'lost' || state === 'stopped')
    return null;
  return saveByAt - likelyAt >= TOLD_APART_MS ? likelyAt : null;
}

/** Outside the ruler there is no mark; the words tell it. */
function likelyShare(likelyAt: Instant | null, now: Instant): number | null {
  if (likelyAt === null || sideBeyond((likelyAt - now) / HOUR_MS) !== null) return null;
  return shareOf(likelyAt, now);
}

function sideBeyond(hours: number): StripLane['beyond'] {
  if (hours < RULER_FROM_HOURS) return 'before';
  return hours > RULER_TO_HOURS ? 'after' : null;
}

/** The earliest save-by that has not passed; `null` when nothing is left that could be saved. */
export function nextSaveBy(facts: StripFacts, now: Instant): Instant | null {
  let next: Instant | null = null;
  for (const compartment of facts.compartments) {
    const { saveByAt } = compartment;
    if (saveByAt === null || stripState(compartment, facts.restoredAt, now) === 'lost') continue;
    if (stripState(compartment, facts.restoredAt, now) === 'stopped') continue;
    if (next === null || saveByAt < next) next = saveByAt;
  }
  return next;
}

/** What a call's row tells of its compartments, whatever unit they are in. */
export function stripFactsOf(call: {
  readonly lostAt: Instant;
  readonly restoredAt: Instant | null;
  readonly units: readonly { readonly compartments: readonly StripCompartment[] }[];
}): StripFacts {
  return {
    lostAt: call.lostAt,
    restoredAt: call.restoredAt,
    compartments: call.units.flatMap((unit) => unit.compartments),
  };
}

/** Room left and right of the ruler, so that a glyph at either end is not cut. */
export const STRIP_INSET_PX = 11;

/**
 * The ruler as a CSS background. One gradient serves every row, which is far cheaper than lines
 * drawn in each of them.
 */
export function rulerBackground(): string {
  const at = (share: number, nudge: number) =>
    `calc(${STRIP_INSET_PX + nudge}px + (100% - ${2 * STRIP_INSET_PX}px) * ${share.toFixed(4)})`;
  const stops: string[] = [];
  // What has been and what is far off stand on a ground of their own.
  let ground = 'color-mix(in srgb, var(--thaw-lost-ground) 70%, transparent)';
  for (const hours of RULER_HOURS) {
    const share = shareOfHours(hours);
    const half = hours === 0 ? 1 : 0.5;
    const colour = lineColour(hours);
    stops.push(`${ground} 0 ${at(share, -half)}`, `${colour} 0 ${at(share, half)}`);
    if (hours === 0) ground = 'transparent';
    if (hours === 12) ground = 'color-mix(in srgb, var(--thaw-lost-ground) 35%, transparent)';
  }
  stops.push(`${ground} 0`);
  return `linear-gradient(to right, ${stops.join(', ')})`;
}

function lineColour(hours: number): string {
  if (hours === 0) return 'var(--thaw-ink)';
  return hours === 12
    ? 'color-mix(in srgb, var(--thaw-rule-strong) 60%, transparent)'
    : 'var(--thaw-rule)';
}
