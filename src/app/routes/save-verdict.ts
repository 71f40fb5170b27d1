import type { CompartmentKind } from '@shared/domain/cold-unit';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import { type StripFacts, type StripState, stripState } from '../board/cold-strip-scale';
import { COMPARTMENT_WORDS } from '../board/compartment-words';
import { duration, money } from '../core/zone';

/** `part`: the visit saves some of what can still be saved, and comes too late for the rest. */
export type VerdictKind = 'in-time' | 'part' | 'too-late' | 'nothing-left';

/** What a visit that ends at a given moment comes in time for. */
export interface SaveVerdict {
  readonly kind: VerdictKind;
  /** The next save-by as of now, which the verdict is about; `null` when nothing is left. */
  readonly next: {
    readonly kind: CompartmentKind;
    readonly saveByAt: Instant;
    /** How its glyph is drawn: struck through when the visit comes too late for it. */
    readonly state: StripState;
  } | null;
  /** From the end of the visit to that save-by; negative when it comes too late. */
  readonly spareMs: number;
  readonly savedCents: number;
  readonly missedCents: number;
}

export interface ValuedFacts extends StripFacts {
  readonly compartments: readonly (StripFacts['compartments'][number] & {
    readonly valueCents: number;
  })[];
}

/** The facts of a call's row or a stop's card, its compartments with what they are worth. */
export function valuedFactsOf(call: {
  readonly lostAt: Instant;
  readonly restoredAt?: Instant | null;
  readonly units: readonly { readonly compartments: ValuedFacts['compartments'] }[];
}): ValuedFacts {
  return {
    lostAt: call.lostAt,
    restoredAt: call.restoredAt ?? null,
    compartments: call.units.flatMap((unit) => unit.compartments),
  };
}

/**
 * Cooling counts as back at the end of the visit, which is the later and so the more careful
 * moment. Medicine without a published hour is left to the pharmacist and says nothing here.
 */
export function saveVerdict(facts: ValuedFacts, finishAt: Instant, now: Instant): SaveVerdict {
  let next: SaveVerdict['next'] = null;
  let savedCents = 0;
  let missedCents = 0;
  let saved = 0;
  let missed = 0;
  for (const compartment of facts.compartments) {
    const { saveByAt, kind, valueCents } = compartment;
    const state = stripState(compartment, facts.restoredAt, now);
    if (saveByAt === null || state === 'lost' || state === 'stopped') continue;
    const isSaved = finishAt < saveByAt;
    if (isSaved) {
      saved++;
      savedCents += valueCents;
    } else {
      missed++;
      missedCents += valueCents;
    }
    if (next === null || saveByAt < next.saveByAt) {
      next = { kind, saveByAt, state: isSaved ? state : 'lost' };
    }
  }
  const spareMs = next === null ? 0 : next.saveByAt - finishAt;
  return { kind: kindOf(saved, missed), next, spareMs, savedCents, missedCents };
}

function kindOf(saved: number, missed: number): VerdictKind {
  if (saved === 0) return missed === 0 ? 'nothing-left' : 'too-late';
  return missed === 0 ? 'in-time' : 'part';
}

/** "In time: 1 h 40 before the freezer’s save-by", for a line of its own. */
export function verdictWords({
  kind,
  next,
  spareMs,
  savedCents,
  missedCents,
}: SaveVerdict): string {
  if (next === null) return 'Nothing left to save: an ordinary repair';
  const name = COMPARTMENT_WORDS[next.kind].name.toLowerCase();
  switch (kind) {
    case 'in-time':
      return `In time: ${duration(spareMs)} before the save-by of ${name}`;
    case 'part':
      return `Saves ${money(savedCents)}, too late for ${money(missedCents)}: ${name} by ${duration(-spareMs)}`;
    case 'too-late':
      return `Too late by ${duration(-spareMs)} for ${name}`;
    case 'nothing-left':
      return 'Nothing left to save: an ordinary repair';
  }
}

/** Beyond so many hours to spare nobody reads the minutes. */
const MINUTES_UNTIL_MS = 10 * HOUR_MS;

/** The same in the room that a block has. */
export function verdictShort({ kind, spareMs }: SaveVerdict): string {
  switch (kind) {
    case 'in-time':
      return spareMs < MINUTES_UNTIL_MS ? duration(spareMs) : `${Math.floor(spareMs / HOUR_MS)} h`;
    case 'part':
      return 'part';
    case 'too-late':
      return 'too late';
    case 'nothing-left':
      return 'repair';
  }
}
