import { BARE_UNITS, UNIT_WORDS } from './unit-words';

const UNIT_ID = /^([a-z]?-?\d{1,4}[a-z]?|[a-z])$/;
const GLUED_UNIT = /^(apt|unit|ste|lot|rm|trlr|bldg|spc)(\d{1,4}[a-z]?)$/;

/** A unit as the post writes it, and the words without it. */
export interface TakenUnit {
  readonly unit: string | null;
  readonly rest: readonly string[];
}

/** Takes "apt 4", "#4b", "2nd floor" or "basement" out of an address's words, wherever it stands. */
export function takeUnit(tokens: readonly string[]): TakenUnit {
  for (let i = 0; i < tokens.length; i++) {
    const found = unitAt(tokens, i);
    if (found)
      return {
        unit: found.unit,
        rest: [...tokens.slice(0, i), ...tokens.slice(i + found.count)],
      };
  }
  return { unit: null, rest: tokens };
}

function unitAt(tokens: readonly string[], i: number): { unit: string; count: number } | null {
  const token = tokens[i]!;
  const next = tokens[i + 1];
  const word = UNIT_WORDS.get(token);
  if (word && next !== undefined) {
    // "apt #4", "apt no 4", "apartment number 4"
    const isSign = next === '#' || next === 'no' || next === 'number' || next === 'num';
    const id = isSign ? tokens[i + 2] : next;
    if (id !== undefined && UNIT_ID.test(id))
      return { unit: `${word} ${id.toUpperCase()}`, count: isSign ? 3 : 2 };
  }
  // "#12 Larch" is house 12; "#4 12 Larch" has an apartment.
  const isAfterNumber = i > 0 || /^\d/.test(tokens[i + 2] ?? '');
  if (token === '#' && next !== undefined && UNIT_ID.test(next) && isAfterNumber)
    return { unit: `Unit ${next.toUpperCase()}`, count: 2 };
  const glued = GLUED_UNIT.exec(token);
  if (glued) return { unit: `${UNIT_WORDS.get(glued[1]!)!} ${glued[2]!.toUpperCase()}`, count: 1 };
  const floor = /^(\d{1,2})(st|nd|rd|th)$/.exec(token);
  if (floor && (next === 'floor' || next === 'fl')) return { unit: `Fl ${floor[1]!}`, count: 2 };
  const bare = BARE_UNITS.get(token);
  return bare && i > 1 && i === tokens.length - 1 ? { unit: bare, count: 1 } : null;
}
