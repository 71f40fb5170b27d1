import type { MedicineKind } from '../cold-unit';
import { isDenied } from './negation';
import { editDistance, plain } from './plain-text';

/** What a row says about medicine that must stay cold. */
export interface MedicineSaid {
  readonly mentioned: boolean;
  readonly kinds: readonly MedicineKind[];
  /** The words that were taken for it, as written there. */
  readonly words: readonly string[];
}

const WORDS: readonly { kind: MedicineKind; pattern: RegExp }[] = [
  {
    kind: 'frozen-milk',
    pattern:
      /\b(?:frozen (?:breast ?milk|brest ?milk|pumped milk|bm)|breast ?milk (?:\w+ ){0,3}(?:freezer|frzr|frozen|deep ?freeze)|(?:milk|breastmilk) stash)\b/g,
  },
  {
    kind: 'milk-or-formula',
    pattern:
      /\b(?:b(?:r)?e?a?st ?-?milk|breast milk|brest milk|expressed milk|pumped milk|ebm|donor milk|(?:bab(?:y|ies)(?:'?s)?|infant(?:'?s)?) (?:formula|milk)|formula|leche materna|formula infantil)\b/g,
  },
  {
    kind: 'insulin',
    pattern: /\b(?:insulina?|insul|diabetic(?:'?s)? (?:meds?|medicine|supplies))\b/g,
  },
  {
    kind: 'injectable',
    pattern:
      /\b(?:vaccin\w*|vacc?unas?|vacines?|vax|injectables?|injections?|inyecci\w*|biologics?|(?:allergy|fertility|arthritis|ms|migraine|weekly|hormone) shots?|growth hormone|fertility (?:meds?|drugs?)|chemo\w*|iv (?:meds?|bags?|antibiotics?)|tpn|infusions?|semaglutide)\b/g,
  },
  {
    kind: 'label-not-read',
    pattern:
      /\b(?:med(?:s|'s)|medic(?:ation|ations|ine|ines|al|in|ins)|medecines?|medicaments?|medicamentos?|medicinas?|meds?[ /-]*(?:fridge|frig|refrigerator|refrig|cooler|in)|rx|prescriptions?|scripts|eye ?drops|antibiotics?|suppositor\w+|probiotics? rx|diabet\w+|pharmac\w+|farmacia|refrigerated drugs?|specimens?|lab samples?)\b/g,
  },
  // On its own this word is as often a priority or a size.
  {
    kind: 'label-not-read',
    pattern:
      /(?<!(?:priority|size|prio|pri)[ :=-]*)\bmed\b(?! ?-?(?:size|sized|priority|prio|high|low|heat|\w*ium))/g,
  },
];
const NOT_COLD =
  /^(?:medical)\s+(?:alert|equipment|bed|device|oxygen|baseline|office bldg|center|ctr|arts|park|dr)\b/;
const LIST_WORD =
  /(?:insulina?|meds?|med's|medicines?|medications?|medical|vaccines?|formula|(?:breast ?)?milk|rx|food|kids|children|infants?|bab(?:y|ies)|elderly|pets?|oxygen|medicinas?|vacunas?|leche)/;

const NO_MEDICINE: MedicineSaid = { mentioned: false, kinds: [], words: [] };
/** Without one of these stems no word above can stand in the text; most messages have none. */
const HINT =
  /med|milk|ebm|\bbm\b|formula|leche|va[cx]|inject|inyec|biolog|shot|hormone|fertil|chemo|\biv\b|tpn|infus|semag|rx|prescr|script|eye ?dr|antibio|supposit|probiot|diabet|pharm|farmac|drug|specimen|sample|\b[ei]n?[sz]/;

/**
 * Looks for medicine, vaccines and mother's milk in a row's own words. Denials are heard ("no
 * insulin"); what is unclear counts as mentioned, so that a person asks.
 */
export function readMedicine(raw: string): MedicineSaid {
  const text = plain(raw);
  if (!HINT.test(text)) return NO_MEDICINE;
  const kinds = new Set<MedicineKind>();
  const words: string[] = [];
  const taken: [number, number][] = [];
  const note = (kind: MedicineKind, start: number, end: number): void => {
    if (taken.some(([from, to]) => start < to && from < end)) return;
    taken.push([start, end]);
    if (isDenied(text, start, end, LIST_WORD)) return;
    if (NOT_COLD.test(text.slice(start))) return;
    kinds.add(kind);
    words.push(text.slice(start, end));
  };
  for (const { kind, pattern } of WORDS) {
    for (const match of text.matchAll(pattern)) {
      note(kind, match.index, match.index + match[0].length);
    }
  }
  for (const match of text.matchAll(/\b[ei]n?[sz][a-z]{3,7}\b/g)) {
    const word = match[0];
    if (
      !/^insult|^instal|^insul(?:at|t)|^insid|^ensu/.test(word) &&
      editDistance(word, 'insulin', 2) <= 2
    ) {
      note('insulin', match.index, match.index + word.length);
    }
  }
  // The general words add nothing once a kind is known.
  if (kinds.size > 1) kinds.delete('label-not-read');
  return { mentioned: kinds.size > 0, kinds: [...kinds], words };
}

/**
 * Reads a column that asks for medicine, where "Y" is an answer and any other words name one.
 *
 * @param header the column's title, for "Insulin?" with a cell of "yes"
 */
export function readMedicineCell(raw: string, header: string | null): MedicineSaid {
  const said = readMedicine(raw);
  if (said.mentioned) return said;
  const cell = plain(raw).replace(/[.!]+$/, '');
  if (/^(?:y|yes|yep|x|1|t|true|si|check(?:ed)?|pos)\b/.test(cell)) {
    const titled = readMedicine(header ?? '');
    return titled.mentioned
      ? { ...titled, words: [cell] }
      : { mentioned: true, kinds: ['label-not-read'], words: [cell] };
  }
  const nothing =
    cell === '' ||
    /^(?:n|no|non|nein|none|0|f|false|neg\w*|nope|nada|ningun\w*|n\/?a|unk\w*|not asked)\b/.test(
      cell,
    ) ||
    !/[a-z]{3}/.test(cell);
  if (nothing || /\b(?:no|none|denies|denied|not)\b/.test(cell)) return said;
  return { mentioned: true, kinds: ['label-not-read'], words: [cell] };
}
