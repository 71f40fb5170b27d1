import { saysNothing } from './plain-text';

const NO_NAME =
  /^(?:unknown(?: caller)?|no name|not given|refused|anonymous|caller|n\/?a|none given|wireless caller|cell(?:ular)? (?:phone|caller)|private(?: caller)?|blocked|sin nombre|same|would ?n.?t (?:say|give).*|did ?n.?t (?:say|give).*|wouldnt give)\.?$/i;
const COMPANY =
  /\b(?:inc|llc|ltd|co|corp|diner|cafe|grill|market|store|restaurant|clinic|church|school|motel|inn|deli|bakery|pharmacy|shop|bar|hotel|home|center|centre)\b\.?/i;

export interface NameSaid {
  readonly name: string | null;
  /** "(daughter)", "c/o", and what else stood with the name. */
  readonly note: string;
}

/** A person's name as a form would hold it, from "ASHGROVE, WREN (daughter)". */
export function readName(raw: string): NameSaid {
  const notes: string[] = [];
  let text = raw
    .replace(/[\r\n]+/g, ' ')
    .replace(/\(([^)]*)\)/g, (_, inside: string) => (notes.push(inside.trim()), ' '))
    .replace(/(?:\+?1[\s.-]*)?\(?\d{3}\)?[\s.-]*\d{3}[\s.-]*\d{4}/g, ' ')
    .replace(/\s+/g, ' ')
    .replace(/^["'\s,;:/-]+|[\s,;:/"-]+$/g, '')
    .trim();
  if (text === '' || saysNothing(text) || NO_NAME.test(text))
    return { name: null, note: notes.join('; ') };
  const flipped = /^([^,]+),\s*([^,]+)$/.exec(text);
  const suffix = /\s(jr|sr|ii|iii)\.?$/i.exec(flipped?.[2] ?? '');
  if (flipped && suffix && !COMPANY.test(text)) {
    text = `${(flipped[2] ?? '').slice(0, suffix.index)} ${flipped[1]}${suffix[0]}`;
  } else if (
    flipped &&
    !COMPANY.test(text) &&
    !/^(?:jr|sr|ii|iii|iv|md|phd|rn|dds)\b\.?$/i.test(flipped[2] ?? '')
  ) {
    text = `${flipped[2]} ${flipped[1]}`;
  }
  return { name: capitals(text), note: notes.join('; ') };
}

/** First and last name, or whichever there is. */
export function joinName(first: string, last: string): string {
  return [first, last]
    .map((part) => part.trim())
    .filter((part) => !saysNothing(part))
    .join(' ');
}

/** All-capital and all-small names as people write them; mixed ones are left alone. */
function capitals(text: string): string {
  const isMixed = /\p{Lu}/u.test(text) && /\p{Ll}/u.test(text);
  if (isMixed) return text;
  return text
    .toLowerCase()
    .replace(
      /(^|[\s\-'\u2019.&/])(\p{L})/gu,
      (_, gap: string, letter: string) => gap + letter.toUpperCase(),
    )
    .replace(/(['\u2019])S\b/g, '$1s')
    .replace(/\bMc(\p{Ll})/gu, (_, letter: string) => `Mc${letter.toUpperCase()}`);
}
