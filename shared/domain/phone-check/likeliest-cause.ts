import { CAUSE_IDS, CAUSES, type CauseId } from './causes';

/** The likeliest of a call's causes, which are kept in words; `null` when none is known. */
export function likeliestCause(causes: readonly string[]): CauseId | null {
  const [first] = causes;
  if (first === undefined) return null;
  return (
    CAUSE_IDS.find(
      (id) => first === CAUSES[id].words || first.startsWith(`${CAUSES[id].words} (`),
    ) ?? null
  );
}

/**
 * The likeliest cause of each cold unit that the check asked about. Where there are several, the words name
 * the unit behind the cause; units of one name have each cause as often as there are such units.
 */
export function likeliestOfUnits(causes: readonly string[]): CauseId[] {
  const first = new Map<string, string>();
  return causes.flatMap((words) => {
    const unit = /\): (.*)$/.exec(words)?.[1] ?? '';
    const leading = first.get(unit) ?? words;
    first.set(unit, leading);
    return words === leading ? (likeliestCause([words]) ?? []) : [];
  });
}
