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
