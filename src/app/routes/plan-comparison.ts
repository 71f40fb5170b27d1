import type { PlanDto, StopDto } from '@shared/contract/routes';
import type { Instant } from '@shared/domain/instant';
import { MINUTE_MS } from '@shared/domain/instant';
import { duration, money } from '../core/zone';

/** One line of the comparison: the routes in force, the proposal, and the difference in words. */
export interface FigureLine {
  readonly label: string;
  readonly inForce: string;
  readonly proposed: string;
  readonly difference: string;
  readonly turn: 'better' | 'worse' | 'same' | 'neither';
}

type Figures = PlanDto['figures'];

interface FigureKind {
  readonly label: string;
  /** Left out where a plan of an earlier version does not say it. */
  readonly of: (figures: Figures) => number | undefined;
  readonly words: (value: number) => string;
  /** `neither`: more of it is neither good nor bad. */
  readonly good: 'more' | 'less' | 'neither';
}

const whole = (value: number): string => Math.round(value).toLocaleString('en-US');
const minutes = (value: number): string => duration(Math.round(value) * MINUTE_MS);

const FIGURES: readonly FigureKind[] = [
  { label: 'Food saved', of: (f) => f.savedCents, words: money, good: 'more' },
  { label: 'Food lost', of: (f) => f.lostCents, words: money, good: 'less' },
  { label: 'Miles', of: (f) => f.driveMiles, words: whole, good: 'less' },
  { label: 'Driving', of: (f) => f.driveMinutes, words: minutes, good: 'less' },
  { label: 'Lateness', of: (f) => f.lateMinutes, words: minutes, good: 'less' },
  { label: 'Overtime', of: (f) => f.overtimeMinutes, words: minutes, good: 'less' },
  { label: 'Stops', of: (f) => f.stops, words: whole, good: 'more' },
  { label: 'On no route', of: (f) => f.leftOut, words: whole, good: 'less' },
];

/** What routes cost; nothing while there are none. */
const COSTS: ReadonlySet<string> = new Set(['Miles', 'Driving', 'Lateness', 'Overtime']);

/** One set of figures against another, figure by figure. */
export const comparedFigures = (figures: Figures, inForce: Figures): FigureLine[] =>
  FIGURES.flatMap(({ label, of, words, good }): FigureLine[] => {
    const [was, is] = [of(inForce), of(figures)];
    if (was === undefined || is === undefined) return [];
    const [before, after] = [words(was), words(is)];
    // What reads the same is the same, whatever the cents say.
    if (before === after) {
      return [{ label, inForce: before, proposed: after, difference: 'same', turn: 'same' }];
    }
    return [
      {
        label,
        inForce: before,
        proposed: after,
        difference: `${words(Math.abs(is - was))} ${is > was ? 'more' : 'less'}`,
        // Beside no routes at all any drive is more: that is no loss.
        turn: inForce.stops === 0 && COSTS.has(label) ? 'neither' : turnOf(is - was, good),
      },
    ];
  });

/** The proposal against the routes in force, figure by figure. */
export function figureLines({
  figures,
  inForce,
}: Pick<PlanDto, 'figures' | 'inForce'>): FigureLine[] {
  const lines = comparedFigures(figures, inForce);
  lines.push({
    label: 'Stops moved',
    inForce: '',
    proposed: whole(figures.moved),
    difference: '',
    turn: 'neither',
  });
  return lines;
}

function turnOf(change: number, good: FigureKind['good']): FigureLine['turn'] {
  if (good === 'neither') return 'neither';
  return change > 0 === (good === 'more') ? 'better' : 'worse';
}

export interface CallChange {
  readonly callId: string;
  readonly kind: 'added' | 'from-other' | 'to-other' | 'off-route' | 'retimed';
  /** With `from-other` and `to-other`. */
  readonly otherTechnicianId: string | null;
  /** With `retimed`: later when positive. */
  readonly laterMs: number;
  /** What this change gains by itself, where the planner has found it out. */
  readonly gainCents?: number | undefined;
}

/** What the proposal changes for one technician. */
export interface TechnicianChanges {
  readonly technicianId: string;
  readonly changes: readonly CallChange[];
  readonly unchanged: number;
}

/** A start that moves by less is the same promise; the plan's own figures count alike. */
const SAME_START_MS = 30 * MINUTE_MS;

/** Per technician what the proposal changes; those for whom nothing changes come last. */
export function changesByTechnician(
  plan: Pick<PlanDto, 'routes'>,
  inForce: readonly StopDto[],
): TechnicianChanges[] {
  const before = new Map(inForce.map((stop) => [stop.callId, stop]));
  const after = new Map(
    plan.routes.flatMap(({ technicianId, stops }) =>
      stops.map((stop) => [stop.callId, { ...stop, technicianId }] as const),
    ),
  );
  const byTechnician = new Map<string, { changes: CallChange[]; unchanged: number }>();
  const of = (technicianId: string) => {
    const known = byTechnician.get(technicianId) ?? { changes: [], unchanged: 0 };
    byTechnician.set(technicianId, known);
    return known;
  };
  for (const { callId, technicianId, arriveAt, gainCents } of after.values()) {
    const was = before.get(callId);
    const mine = of(technicianId);
    if (!was) mine.changes.push({ ...change(callId, 'added'), gainCents });
    else if (was.technicianId !== technicianId) {
      mine.changes.push({ ...change(callId, 'from-other', was.technicianId), gainCents });
      of(was.technicianId).changes.push(change(callId, 'to-other', technicianId));
    } else if (Math.abs(arriveAt - was.arriveAt) > SAME_START_MS) {
      mine.changes.push(change(callId, 'retimed', null, arriveAt - was.arriveAt));
    } else mine.unchanged++;
  }
  for (const { callId, technicianId } of inForce) {
    if (!after.has(callId)) of(technicianId).changes.push(change(callId, 'off-route'));
  }
  return [...byTechnician]
    .map(([technicianId, { changes, unchanged }]) => ({ technicianId, changes, unchanged }))
    .sort((a, b) => b.changes.length - a.changes.length);
}

/** Whether a proposal leaves every stop as it is, so that there is nothing to publish. */
export const changesNothing = (
  plan: Pick<PlanDto, 'routes'>,
  inForce: readonly StopDto[],
): boolean => changesByTechnician(plan, inForce).every(({ changes }) => changes.length === 0);

const change = (
  callId: string,
  kind: CallChange['kind'],
  otherTechnicianId: string | null = null,
  laterMs = 0,
): CallChange => ({ callId, kind, otherTechnicianId, laterMs });

/**
 * "call 214 is new", "call 12 comes 40 min later".
 *
 * @param numberOf what people call a call by
 * @param nameOf a technician's name
 */
export function changeWords(
  { callId, kind, otherTechnicianId, laterMs, gainCents }: CallChange,
  numberOf: (callId: string) => string,
  nameOf: (technicianId: string) => string,
): string {
  const call = `Call ${numberOf(callId)}`;
  const other = otherTechnicianId === null ? '' : nameOf(otherTechnicianId);
  switch (kind) {
    case 'added':
      return `${call} is new${gainWords(gainCents)}`;
    case 'from-other':
      return `${call} comes from ${other}${gainWords(gainCents)}`;
    case 'to-other':
      return `${call} goes to ${other}`;
    case 'off-route':
      return `${call} leaves the route`;
    case 'retimed':
      return `${call} comes ${duration(Math.abs(laterMs))} ${laterMs > 0 ? 'later' : 'earlier'}`;
  }
}

/** Below a dollar a change is only there to make room for others. */
function gainWords(cents: number | undefined): string {
  if (cents === undefined) return '';
  return cents < 100 ? ' (makes room)' : ` (gains ${money(cents)})`;
}

/** What one technician's proposed route does, in words. */
export function routeWords(figures: NonNullable<PlanDto['routes'][number]['figures']>): string {
  const { savedCents, driveMiles, driveMinutes, lateMinutes, overtimeMinutes } = figures;
  return [
    `saves ${money(savedCents)}`,
    `${whole(driveMiles)} mi, ${minutes(driveMinutes)} of driving`,
    ...(lateMinutes > 0 ? [`${minutes(lateMinutes)} late`] : []),
    ...(overtimeMinutes > 0 ? [`${minutes(overtimeMinutes)} of overtime`] : []),
  ].join('; ');
}

/** Whether a call's stop is another in the proposal: for the mark on its block. */
export const isMovedBy = (
  stop: { readonly technicianId: string; readonly arriveAt: Instant },
  was: { readonly technicianId: string; readonly arriveAt: Instant },
): boolean =>
  was.technicianId !== stop.technicianId || Math.abs(was.arriveAt - stop.arriveAt) > SAME_START_MS;
