import { plainText, tokensOf } from './address-tokens';
import { isOnlyPostBox, withoutPostBox } from './post-box';
import { canonicalWords } from './street-words';
import { takeUnit } from './take-unit';
import { houseNumberReadings, isHouseNumber, isPostcode } from './take-number';

/** What a caller's words say about a place; nothing is looked up yet. */
export interface ParsedAddress {
  readonly number: string | null;
  /** "Apt 4", as the post writes it. */
  readonly unit: string | null;
  /** Words of the street in their canonical spelling; without a comma the city's may follow. */
  readonly street: readonly string[];
  /** Words of the second street when a corner is meant. */
  readonly cross: readonly string[] | null;
  /** Words after the comma: city, state. */
  readonly tail: readonly string[];
  /** Five figures, or the part of them that was said. */
  readonly postcode: string | null;
  /** A post box and no street: nobody can drive there. */
  readonly isPostBox: boolean;
  /** How far-fetched this way of reading the words is; 0 for the plain one. Adds to a match's cost. */
  readonly doubt: number;
}

/** What follows says where about the address is, not what it is. */
const NOTES = new Set(['near', 'off', 'behind', 'across', 'between', 'past', 'opposite']);
/** Between two streets; '&' can mean nothing else. */
const CROSSES = new Set(['&', 'and', 'at', '@', 'x', 'by']);
const CORNER = /\b(the )?(corner|intersection|crossing|junction) of\b/g;

/** The likeliest way to read an address, in whatever order and spelling it was written or typed. */
export const parseAddress = (text: string): ParsedAddress => waysToRead(text)[0]!;

/** All ways to read an address: which figure is the house's, whether two streets are meant. Likeliest first. */
export function waysToRead(text: string): ParsedAddress[] {
  const plain = plainText(text);
  const isPostBox = isOnlyPostBox(plain);
  const saysCorner = plain.search(CORNER) >= 0;
  const segments = withoutPostBox(plain)
    .rest.replace(CORNER, ' ')
    .split(/[,;\n]+/)
    .map((segment) => takeUnit(withoutLead(tokensOf(segment))));
  const unit = segments.map((found) => found.unit).find((found) => found !== null) ?? null;
  const parts = joinLoneNumber(segments.map(({ rest }) => rest).filter((rest) => rest.length > 0));
  const shared = { unit, isPostBox };
  if (parts.length === 0 || isPostBox)
    return [
      { ...shared, number: null, street: [], cross: null, tail: [], postcode: null, doubt: 0 },
    ];

  const main = mainPart(parts);
  const ways = wholeWays(parts, main, saysCorner);
  // "Gullwick, Heron St": without a figure the order of the parts tells little.
  const other = main === 0 && parts.length > 1 && !parts.flat().some(isHouseNumber) ? 1 : null;
  if (other !== null)
    ways.push(
      ...wholeWays(parts, other, saysCorner).map((way) => ({ ...way, doubt: way.doubt + 0.1 })),
    );
  return ways.map((way) => ({ ...way, ...shared })).sort((a, b) => a.doubt - b.doubt);
}

type Way = Omit<ParsedAddress, 'unit' | 'isPostBox'>;

function wholeWays(
  parts: readonly (readonly string[])[],
  main: number,
  saysCorner: boolean,
): Way[] {
  const tailTokens = parts.flatMap((tokens, i) => (i === main ? [] : tokens));
  const code = tailTokens.find(isPostcode) ?? tailTokens.find((token) => /^0\d{2,3}$/.test(token));
  const tail = canonicalWords(tailTokens.filter((token) => token !== code));
  const tokens = parts[main]!;
  const { first, second, isSure } = splitCross(tokens);
  const whole = (own: readonly string[], cross: string[] | null, more: number): Way[] =>
    houseNumberReadings(own, code !== undefined).map(({ number, rest, postcode, doubt }) => ({
      number,
      street: canonicalWords(upToNote(rest)),
      cross,
      tail,
      postcode: code?.slice(0, 5) ?? postcode?.slice(0, 5) ?? null,
      doubt: doubt + more,
    }));
  if (second.length === 0) return whole(tokens, null, 0);
  const cross = canonicalWords(upToNote(second));
  // "1210 Heron at Gullwick" has no second street.
  const plain = tokens.filter((token, i) => i === 0 || !CROSSES.has(token));
  return [...whole(first, cross, 0), ...(isSure || saysCorner ? [] : whole(plain, null, 0.05))];
}

/** "It's 1210 Heron", "my address is number 1210 Heron": how people begin. */
const LEADS = new Set(
  'its it is im i am we are were at my our the address house home number num live on over out down up here hi yes um uh ok so in'.split(
    ' ',
  ),
);

function withoutLead(tokens: readonly string[]): readonly string[] {
  const from = tokens.findIndex((token) => !LEADS.has(token));
  return from <= 0 ? tokens : tokens.slice(from);
}

/** The part that is the street: the one with a house number, else with a crossing, else the first. */
function mainPart(parts: readonly (readonly string[])[]): number {
  const numbered = parts.findIndex((tokens) =>
    tokens.some(
      (token, i) => isHouseNumber(token) && (!isPostcode(token) || i < tokens.length - 1),
    ),
  );
  if (numbered >= 0) return numbered;
  return Math.max(
    0,
    parts.findIndex((tokens) => tokens.includes('&') || tokens.includes('@')),
  );
}

/** "1210, N Heron St" is one line that a form has cut in two. */
function joinLoneNumber(parts: readonly (readonly string[])[]): (readonly string[])[] {
  const at = parts.findIndex(
    (tokens) => tokens.length === 1 && isHouseNumber(tokens[0]!) && !isPostcode(tokens[0]!),
  );
  if (at < 0) return [...parts];
  const neighbour = at + 1 < parts.length ? at + 1 : at - 1;
  if (neighbour < 0) return [...parts];
  // A figure at the very end, of a line that has its number: a part of a postcode.
  if (at === parts.length - 1 && /^0\d+$/.test(parts[at]![0]!)) return [...parts];
  const joined = [...parts[at]!, ...parts[neighbour]!];
  return parts.flatMap((tokens, i) => (i === at ? [joined] : i === neighbour ? [] : [tokens]));
}

function splitCross(tokens: readonly string[]): {
  first: string[];
  second: string[];
  isSure: boolean;
} {
  const at = tokens.findIndex((token, i) => i > 0 && i < tokens.length - 1 && CROSSES.has(token));
  return at < 0
    ? { first: [...tokens], second: [], isSure: false }
    : {
        first: tokens.slice(0, at),
        second: tokens.slice(at + 1).filter((token) => !CROSSES.has(token) && token !== 'corner'),
        isSure: tokens[at] === '&' || tokens[at] === '@',
      };
}

function upToNote(tokens: readonly string[]): readonly string[] {
  const at = tokens.findIndex((token, i) => i > 0 && NOTES.has(token));
  return at < 0 ? tokens : tokens.slice(0, at);
}
