import type { UnitKind } from '../cold-unit';
import { editDistance, plain } from './plain-text';
import {
  ASSUMED_KIND,
  COLUMN_ONLY,
  FUZZY,
  NOT_FUZZY,
  OTHER_APPLIANCE,
  UNIT_PATTERNS,
} from './unit-words';
import type { UnitFamily } from './unit-words';

/** One cold unit as a row names it. */
export interface UnitSaid {
  readonly kind: UnitKind;
  /** The words that named it. */
  readonly said: string;
  /** The kind was not said ("freezer"), so the cautious one was taken. */
  readonly assumed: boolean;
}

export interface UnitsSaid {
  readonly units: readonly UnitSaid[];
  /** Another kind of appliance that the text names, such as a washer. */
  readonly other: string | null;
  /** Units that are named only to say that they run. */
  readonly running: boolean;
  readonly doubts: readonly string[];
}

interface Mention {
  readonly family: UnitFamily;
  readonly start: number;
  readonly end: number;
  readonly said: string;
  readonly count: number;
  readonly place: string | null;
  readonly isRunning: boolean;
}

/**
 * The cold units of a row, from its appliance cell and its message.
 *
 * The cell decides; the message adds a unit only where it plainly means a further one, and names the
 * kind where the cell left it open.
 */
export function readUnits(cell: string, message: string): UnitsSaid {
  const inCell = mentionsIn(cell, true);
  const inMessage = mentionsIn(message, false);
  const doubts: string[] = [];
  const chosen: Mention[] = [];
  let running = false;

  for (const mentions of [inCell, inMessage]) {
    const text = plain(mentions === inCell ? cell : message);
    const cellNamedOne = mentions === inMessage && chosen.length > 0;
    for (const mention of mentions) {
      if (mention.isRunning) {
        running = true;
        if (mentions.length > 1 || chosen.length > 0) continue;
      }
      if (refines(chosen, mention)) continue;
      if (isRepeat(chosen, mention, text, cellNamedOne)) continue;
      const twin = joined(chosen, mention, text);
      if (twin) doubts.push('"fridge and freezer" was taken for two units; it may be one');
      for (let n = 0; n < mention.count; n++) chosen.push(mention);
      if (
        mention.count > 1 &&
        /[a-z]s$/.test(mention.said) &&
        !/\d|two|both|three/.test(mention.said)
      ) {
        doubts.push(`"${mention.said}" was taken for two`);
      }
    }
  }
  const units = chosen.map(({ family, said }) => ({
    kind: family === 'plain-fridge' || family === 'plain-freezer' ? ASSUMED_KIND[family] : family,
    said,
    assumed: family === 'plain-fridge' || family === 'plain-freezer',
  }));
  const other = OTHER_APPLIANCE.exec(plain(cell)) ?? OTHER_APPLIANCE.exec(plain(message));
  return { units, other: other?.[0] ?? null, running, doubts };
}

/** Whether a text names a cold unit at all; for guessing columns. */
export function namesUnit(text: string, isColumn: boolean): boolean {
  return mentionsIn(text, isColumn).length > 0;
}

const COUNT_BEFORE =
  /\b(2|two|both|3|three|4|four|dos|ambas|ambos|tres)(?: x| of (?:the|my|our))?(?: (?:the|my|our|of|big|large|small|old|las|los))* ?$|\b(2|3|4) ?x ?$/;
const COUNT_AFTER = /^\s*(?:x ?([234])\b|\(x?([234])\)|- ?([234]) (?:of|units)\b)/;
const PLACE =
  '(kitchen|garage|basement|cellar|porch|shed|barn|outside|upstairs|downstairs|utility|laundry|pantry|back|front|office|shop|cocina|garaje|sotano)';
const PLACE_BEFORE = new RegExp(`\\b${PLACE} $`);
const PLACE_AFTER = new RegExp(
  `^ ?\\(?(?:is |are )?(?:in|on|at|out in|down in|en)? ?(?:the |my |his |her |el |la )?${PLACE}\\b`,
);
const RUNS =
  /^\s*(?:(?!not|no|isn|ain|won|never|keeps?|stopped)\w+ )?(?:is |are |seems? |was |both |=|:|-|esta |funciona )?\s*(?:still |now |all |also |doing |keeping |bien )*(?:(?:ok|okay|fine|good|alright|bien)\b(?! for)|(?:works|working|running|cold|cooling|holding|on)(?: (?:again|now|ok|fine|though|tho))*\s*(?:$|[.,;)/]|\band (?!(?:warm|hot|not))|\bbut (?:the|freezer|frzr|fridge)))/;
const FURTHER =
  /\b(?:also|too|plus|another|second|2nd|other|extra|as well|additional|tambien|otra|otro|both|and|&|\+|y)\b|[+&]/;

function mentionsIn(raw: string, isColumn: boolean): Mention[] {
  let text = plain(raw);
  if (text === '') return [];
  if (isColumn) {
    const short = COLUMN_ONLY[text.replace(/[.\s]+$/g, '')];
    if (short) return [bareMention(short, text)];
  }
  const original = text;
  const mentions: Mention[] = [];
  for (const { family, pattern } of UNIT_PATTERNS) {
    text = text.replace(pattern, (...args: unknown[]) => {
      const match = String(args[0]);
      // Groups are never captured in these patterns, so the offset is the second argument.
      const start = Number(args[1]);
      if (family !== 'no-unit') {
        mentions.push(
          ...sorted(mentionAt(original, family, start, start + match.length), original),
        );
      }
      return '\u0001'.repeat(match.length);
    });
  }
  for (const match of text.matchAll(/\b[fr][a-z]{4,13}\b/g)) {
    if (NOT_FUZZY.test(match[0])) continue;
    const near = FUZZY.find(
      ({ word, limit, first }) =>
        match[0].startsWith(first) && editDistance(match[0], word, limit) <= limit,
    );
    if (near)
      mentions.push(mentionAt(original, near.family, match.index, match.index + match[0].length));
  }
  if (isColumn && mentions.length < 3) {
    // "Fridge, chest" and "frig/upright": the short forms count beside a full one.
    for (const match of text.matchAll(/(?<![a-z])(chest|upright|deep|ref|frg|fz)(?![a-z])/g)) {
      const family = COLUMN_ONLY[match[0]];
      if (family)
        mentions.push(mentionAt(original, family, match.index, match.index + match[0].length));
    }
  }
  return mentions.sort((a, b) => a.start - b.start);
}

function mentionAt(text: string, family: UnitFamily, start: number, end: number): Mention {
  const before = text.slice(Math.max(0, start - 24), start);
  const after = text.slice(end);
  const counted =
    COUNT_BEFORE.exec(before)?.slice(1).find(Boolean) ??
    COUNT_AFTER.exec(after)?.slice(1).find(Boolean);
  const words: Record<string, number> = {
    two: 2,
    both: 2,
    dos: 2,
    ambas: 2,
    ambos: 2,
    three: 3,
    tres: 3,
    four: 4,
  };
  const said = text.slice(start, end);
  const isPlural = /(?:fridges|freezers|refrigerators|frigs|neveras|coolers|congeladores)$/.test(
    said,
  );
  const count = counted ? (words[counted] ?? Number(counted)) : isPlural ? 2 : 1;
  return {
    family,
    start,
    end,
    said: counted ? `${counted} ${said}` : said,
    count,
    place: PLACE_BEFORE.exec(before)?.[1] ?? PLACE_AFTER.exec(after)?.[1] ?? null,
    isRunning:
      RUNS.test(after) && !/\b(?:not|isn'?t|no longer|never|stopped|won'?t|no) $/.test(before),
  };
}

/** "two freezers (1 upright, 1 chest)" */
function sorted(mention: Mention, text: string): Mention[] {
  const after = text.slice(mention.end, mention.end + 40);
  const both =
    /^ ?\([^)]*\b(?:upright|stand ?-?up)\b[^)]*\b(?:chest|deep)\b|^ ?\([^)]*\b(?:chest|deep)\b[^)]*\b(?:upright|stand ?-?up)\b/.test(
      after,
    );
  if (mention.family !== 'plain-freezer' || mention.count !== 2 || !both) return [mention];
  return [
    { ...mention, family: 'upright-freezer', count: 1 },
    { ...mention, family: 'chest-freezer', count: 1 },
  ];
}

function bareMention(family: UnitFamily, text: string): Mention {
  return {
    family,
    start: 0,
    end: text.length,
    said: text,
    count: 1,
    place: null,
    isRunning: false,
  };
}

const isFreezer = (family: UnitFamily): boolean =>
  family === 'plain-freezer' || family === 'chest-freezer' || family === 'upright-freezer';
const isFridge = (family: UnitFamily): boolean =>
  family === 'plain-fridge' || family === 'fridge-freezer' || family === 'refrigerator';

/** "Freezer" in the cell and "chest freezer" in the message are one unit, now of a known kind. */
function refines(chosen: Mention[], mention: Mention): boolean {
  const open =
    mention.family === 'chest-freezer' || mention.family === 'upright-freezer'
      ? 'plain-freezer'
      : mention.family === 'fridge-freezer' || mention.family === 'refrigerator'
        ? 'plain-fridge'
        : null;
  const at = open ? chosen.findIndex(({ family }) => family === open) : -1;
  const known = chosen[at];
  if (at < 0 || !known) return false;
  if (known.place && mention.place && known.place !== mention.place) return false;
  chosen[at] = { ...known, family: mention.family, said: mention.said };
  return true;
}

function isRepeat(
  chosen: readonly Mention[],
  mention: Mention,
  text: string,
  cellNamedOne: boolean,
): boolean {
  if (chosen.length === 0) return false;
  const near =
    text.slice(Math.max(0, mention.start - 12), mention.start) +
    '|' +
    text.slice(mention.end, mention.end + 24);
  const isFurther = FURTHER.test(near);
  const sameSide = chosen.filter(({ family }) =>
    isFreezer(family)
      ? isFreezer(mention.family)
      : isFridge(family)
        ? isFridge(mention.family)
        : family === mention.family,
  );
  const same = sameSide.find(
    ({ family }) =>
      family === mention.family ||
      mention.family === 'plain-fridge' ||
      mention.family === 'plain-freezer',
  );
  if (same) {
    const elsewhere = same.place !== null && mention.place !== null && same.place !== mention.place;
    const another = /\b(?:another|second|2nd|other|extra|additional|otra|otro)\b/.test(
      near.split('|')[0] ?? '',
    );
    return !(elsewhere || another);
  }
  if (
    mention.family === 'plain-freezer' &&
    chosen.some(({ family }) => family === 'fridge-freezer')
  ) {
    return !(isFurther && mention.place !== null);
  }
  if (mention.family === 'plain-freezer' && chosen.some(({ family }) => isFridge(family))) {
    // In running text a fridge's own freezer is meant, unless it is joined on or stands elsewhere.
    return !(
      joined(chosen, mention, text) ||
      mention.place !== null ||
      (isFurther && !/^[^|]*$/.test(near) && addsOn(near))
    );
  }
  if (mention.family === 'plain-fridge' && cellNamedOne)
    return !(isFurther || mention.place !== null);
  return false;
}

const addsOn = (near: string): boolean =>
  /\b(?:also|too|plus|another|second|2nd|other|as well|tambien)\b/.test(near);

/** "fridge and freezer", "fridge, freezer", "frig + frz": side by side with nothing said in between. */
function joined(chosen: readonly Mention[], mention: Mention, text: string): boolean {
  if (mention.family !== 'plain-freezer' && mention.family !== 'plain-fridge') return false;
  return chosen.some((other) => {
    if (other.family !== 'plain-fridge' && other.family !== 'plain-freezer') return false;
    if (other.family === mention.family || other.end > mention.start) return false;
    const between = text.slice(other.end, mention.start);
    return /^\s*(?:,|and|&|\+|;|y|, and|plus|n)\s*(?:the |a |my |also |el |la |un |una )?$/.test(
      between,
    );
  });
}
