import { BARE_UNITS, canonical, isType, UNIT_WORDS } from './street-words';

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
  readonly postcode: string | null;
  readonly isPostBox: boolean;
}

const NUMBER = /^\d{1,6}(-\d{1,4})?[a-z]?$/;
const POSTCODE = /^\d{5}(-\d{4})?$/;
const UNIT_ID = /^([a-z]?-?\d{1,5}[a-z]?|[a-z])$/;
const GLUED_UNIT = /^(apt|unit|ste|lot|rm|trlr|bldg|spc)(\d{1,5}[a-z]?)$/;
/** What follows says where about the address is, not what it is. */
const NOTES = new Set(['near', 'off', 'behind', 'across', 'between', 'past', 'opposite']);
const CROSSES = new Set(['&', 'and', 'at', '@', 'x']);
/** A number after one of these names the road. */
const BEFORE_ROAD_NUMBER = new Set(['hwy', 'rte', 'rd', 'county', 'co', 'cr', 'ave', 'pike']);

/** Takes an address apart, in whatever order and spelling it was written or typed. */
export function parseAddress(text: string): ParsedAddress {
  const plain = text
    .normalize('NFKD')
    .replace(/[\u0300-\u036f]/g, '')
    .toLowerCase();
  const isPostBox = /\bp\.?\s*o\.?\s*box\b/.test(plain);
  const segments = plain
    .replace(/\b(the )?(corner|intersection) of\b/g, ' ')
    .split(/[,;\n]+/)
    .map(tokensOf)
    .filter((tokens) => tokens.length > 0);
  const units = segments.map(takeUnit);
  const unit = units.map((found) => found.unit).find((found) => found !== null) ?? null;
  const parts = joinLoneNumber(units.map(({ rest }) => rest).filter((rest) => rest.length > 0));
  const main = Math.max(
    0,
    parts.findIndex((tokens) =>
      tokens.some((token) => NUMBER.test(token) && !POSTCODE.test(token)),
    ),
  );
  const streetTokens = parts[main] ?? [];
  const tailTokens = parts.filter((_, i) => i !== main).flat();

  const ownTail = takePostcode(tailTokens);
  const split = splitCross(streetTokens);
  const { number, rest } = takeNumber(split.first);
  const ownStreet =
    number !== null && ownTail.postcode === null ? takePostcode(rest) : { postcode: null, rest };
  return {
    number,
    unit,
    street: upToNote(ownStreet.rest).map(canonical),
    cross:
      split.second.length > 0 && number === null ? upToNote(split.second).map(canonical) : null,
    tail: ownTail.rest.map(canonical),
    postcode: ownTail.postcode ?? ownStreet.postcode,
    isPostBox,
  };
}

/** Words and figures; '&', '@', '#' and a hyphen between figures keep their meaning. */
export function tokensOf(text: string): string[] {
  return text
    .toLowerCase()
    .replace(/['.`\u2019]/g, '')
    .replace(/(\d)\s*[-\u2013]\s*(?=\d)/g, '$1-')
    .replace(/1\/2/g, ' half ')
    .replace(/([&@#])/g, ' $1 ')
    .replace(/\//g, ' & ')
    .split(/[^a-z0-9&@#-]+/)
    .map((token) => token.replace(/^-+|-+$/g, ''))
    .flatMap((token) => (/[a-z]-[a-z]/.test(token) ? token.split('-') : [token]))
    .filter((token) => token !== '');
}

function takeUnit(tokens: readonly string[]): { unit: string | null; rest: string[] } {
  for (let i = 0; i < tokens.length; i++) {
    const token = tokens[i]!;
    const next = tokens[i + 1];
    const without = (count: number): string[] => [
      ...tokens.slice(0, i),
      ...tokens.slice(i + count),
    ];
    const word = UNIT_WORDS.get(token);
    if (word && next === '#' && tokens[i + 2] !== undefined)
      return { unit: `${word} ${tokens[i + 2]!.toUpperCase()}`, rest: without(3) };
    if (word && next !== undefined && UNIT_ID.test(next))
      return { unit: `${word} ${next.toUpperCase()}`, rest: without(2) };
    if (token === '#' && next !== undefined && UNIT_ID.test(next))
      return { unit: `Unit ${next.toUpperCase()}`, rest: without(2) };
    const glued = GLUED_UNIT.exec(token);
    if (glued)
      return { unit: `${UNIT_WORDS.get(glued[1]!)!} ${glued[2]!.toUpperCase()}`, rest: without(1) };
    const floor = /^(\d{1,2})(st|nd|rd|th)$/.exec(token);
    if (floor && (next === 'floor' || next === 'fl'))
      return { unit: `Fl ${floor[1]!}`, rest: without(2) };
    const bare = BARE_UNITS.get(token);
    if (bare && i > 1 && i === tokens.length - 1) return { unit: bare, rest: without(1) };
  }
  return { unit: null, rest: [...tokens] };
}

/** "1210, N Heron St" is one line that a form has cut in two. */
function joinLoneNumber(parts: readonly string[][]): string[][] {
  const at = parts.findIndex(
    (tokens) => tokens.length === 1 && NUMBER.test(tokens[0]!) && !POSTCODE.test(tokens[0]!),
  );
  if (at < 0) return [...parts];
  const neighbour = at + 1 < parts.length ? at + 1 : at - 1;
  if (neighbour < 0) return [...parts];
  const joined = [...parts[at]!, ...parts[neighbour]!];
  return parts.flatMap((tokens, i) => (i === at ? [joined] : i === neighbour ? [] : [tokens]));
}

function takePostcode(tokens: readonly string[]): { postcode: string | null; rest: string[] } {
  const last = tokens[tokens.length - 1];
  if (last === undefined || !POSTCODE.test(last)) return { postcode: null, rest: [...tokens] };
  return { postcode: last.slice(0, 5), rest: tokens.slice(0, -1) };
}

function splitCross(tokens: readonly string[]): { first: string[]; second: string[] } {
  const at = tokens.findIndex((token, i) => i > 0 && i < tokens.length - 1 && CROSSES.has(token));
  return at < 0
    ? { first: [...tokens], second: [] }
    : {
        first: tokens.slice(0, at),
        second: tokens.slice(at + 1).filter((token) => !CROSSES.has(token)),
      };
}

function takeNumber(tokens: readonly string[]): { number: string | null; rest: string[] } {
  const first = tokens[0];
  const withoutHalf = (
    number: string,
    rest: readonly string[],
  ): { number: string; rest: string[] } =>
    rest[0] === 'half'
      ? { number: `${number} 1/2`, rest: rest.slice(1) }
      : { number, rest: [...rest] };
  if (first !== undefined && NUMBER.test(first)) {
    const rest = tokens.slice(1);
    // "94 road" is a street, not house 94 of a street called Road.
    if (!(rest.length === 1 && isType(canonical(rest[0]!)))) return withoutHalf(first, rest);
    return { number: null, rest: [...tokens] };
  }
  const postcode = takePostcode(tokens);
  const body = postcode.postcode?.startsWith('0') ? postcode.rest : [...tokens];
  const last = body[body.length - 1];
  const before = body[body.length - 2];
  if (last !== undefined && before !== undefined && NUMBER.test(last) && !isRoadNumber(body)) {
    return {
      number: last,
      rest: [
        ...body.slice(0, -1),
        ...(postcode.postcode?.startsWith('0') ? [postcode.postcode] : []),
      ],
    };
  }
  return { number: null, rest: [...tokens] };
}

/** "highway 30" and "county rd 7" end in the road's own number; "heron rd 7" ends in a house's. */
function isRoadNumber(tokens: readonly string[]): boolean {
  const before = canonical(tokens[tokens.length - 2]!);
  if (!BEFORE_ROAD_NUMBER.has(before)) return false;
  const name = tokens
    .slice(0, -2)
    .map(canonical)
    .filter((token) => !BEFORE_ROAD_NUMBER.has(token) && token.length > 1);
  return name.length === 0;
}

function upToNote(tokens: readonly string[]): string[] {
  const at = tokens.findIndex((token, i) => i > 0 && NOTES.has(token));
  return at < 0 ? [...tokens] : tokens.slice(0, at);
}
