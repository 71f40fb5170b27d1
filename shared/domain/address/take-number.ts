import { canonical, isDirection, isType } from './street-words';

const NUMBER = /^\d{1,6}(-\d{1,4})?[a-z]?$/;
const POSTCODE = /^\d{5}(-\d{4})?$/;
/** A number after one of these names the road. */
const BEFORE_ROAD_NUMBER = new Set(['hwy', 'rte', 'rd', 'county', 'co', 'cr', 'ave', 'pike', 'us']);

export const isHouseNumber = (token: string): boolean => NUMBER.test(token);
export const isPostcode = (token: string): boolean => POSTCODE.test(token);

/** One way to share out the figures of an address. */
export interface NumberReading {
  readonly number: string | null;
  readonly rest: readonly string[];
  readonly postcode: string | null;
  readonly doubt: number;
}

/** How far-fetched it is to take a figure for this. Our estimates; a match weighs far more. */
const DOUBT = {
  last: 0.02,
  middle: 0.06,
  none: 0.15,
  part: 0.08,
  unsaidUnit: 0.12,
  joined: 0.05,
  onlyType: 0.1,
};

/**
 * All ways to take a house number and a postcode out of an address's words: "heron 1210 00012",
 * "94 road 218-09", "1210 hwy 30", "218 09 94 road".
 *
 * @param hasPostcode whether one was found elsewhere
 */
export function houseNumberReadings(
  tokens: readonly string[],
  hasPostcode: boolean,
): NumberReading[] {
  const readings: NumberReading[] = [];
  const seen = new Set<string>();
  const add = (reading: NumberReading): void => {
    const key = JSON.stringify([reading.number, reading.rest, reading.postcode]);
    if (seen.has(key)) return;
    seen.add(key);
    readings.push(reading);
  };
  for (const ending of endings(tokens, hasPostcode)) {
    for (const { number, rest, doubt } of numbersIn(ending.rest))
      add({ number, rest, postcode: ending.postcode, doubt: doubt + ending.doubt });
  }
  return readings.sort((a, b) => a.doubt - b.doubt);
}

type Ending = Omit<NumberReading, 'number'>;
type NumberPart = Omit<NumberReading, 'postcode'>;

/** What the last figure may be beside a house number: a postcode, a part of one, an apartment. */
function endings(tokens: readonly string[], hasPostcode: boolean): Ending[] {
  const whole: Ending = { rest: tokens, postcode: null, doubt: 0 };
  const last = tokens[tokens.length - 1];
  const before = tokens.slice(0, -1);
  if (last === undefined || before.length < 2 || !/^\d/.test(last)) return [whole];
  const hasNumber = before.some(isHouseNumber);
  const found: Ending[] = [whole];
  if (isPostcode(last) && !hasPostcode)
    return [
      { rest: before, postcode: last, doubt: 0 },
      { ...whole, doubt: DOUBT.none },
    ];
  if (hasNumber && !hasPostcode && /^\d{3,4}$/.test(last))
    found.push({
      rest: before,
      postcode: last,
      doubt: last.startsWith('0') ? 0 : DOUBT.part,
    });
  if (hasNumber && isHouseNumber(tokens[0]!) && /^\d{1,4}[a-z]?$/.test(last))
    found.push({ rest: before, postcode: null, doubt: DOUBT.unsaidUnit });
  return found;
}

function numbersIn(tokens: readonly string[]): NumberPart[] {
  const found: NumberPart[] = [];
  tokens.forEach((token, i) => {
    if (!isHouseNumber(token)) return;
    const isHalf = tokens[i + 1] === 'half';
    const rest = [...tokens.slice(0, i), ...tokens.slice(i + (isHalf ? 2 : 1))];
    if (rest.length === 0) return;
    // "94 road" is a street, not house 94 of a street called Road; "94 pl" may become Plover Street.
    if (rest.length === 1 && isType(canonical(rest[0]!))) {
      found.push({ number: token, rest, doubt: DOUBT.onlyType });
      return;
    }
    const place = i === 0 ? 0 : i === tokens.length - 1 ? DOUBT.last : DOUBT.middle;
    const doubt = place + (i > 0 && isRoadNumber(tokens, i) ? DOUBT.none : 0);
    found.push({ number: isHalf ? `${token} 1/2` : token, rest, doubt });
    found.push(...gluedNumbers(token, rest, doubt));
    const next = tokens[i + 1];
    const without = [...tokens.slice(0, i), ...tokens.slice(i + 2)];
    if (next === undefined || without.length === 0) return;
    // "218 09 94 road": the hyphen is not said.
    if (/^\d{1,3}$/.test(token) && /^\d{1,2}$/.test(next))
      found.push({ number: `${token}-${next}`, rest: without, doubt: place + DOUBT.joined });
    if (/^[a-d]$/.test(next) && /^\d+$/.test(token))
      found.push({ number: token + next, rest: without, doubt: place + DOUBT.joined });
  });
  const isRoad = tokens.some(
    (token, i) => isHouseNumber(token) && i > 0 && isRoadNumber(tokens, i),
  );
  const isBare = found.every(({ doubt }) => doubt === DOUBT.onlyType);
  found.push({ number: null, rest: tokens, doubt: isBare || isRoad ? 0 : DOUBT.none });
  return found;
}

/** "1210n heron" may be house 1210N, or 1210 on North Heron. */
function gluedNumbers(token: string, rest: readonly string[], doubt: number): NumberPart[] {
  const glued = /^(\d+)([nsew])$/.exec(token);
  return glued
    ? [{ number: glued[1]!, rest: [glued[2]!, ...rest], doubt: doubt + DOUBT.joined }]
    : [];
}

/** "highway 30" and "county rd 7" name the road; "heron rd 7" ends in a house's number. */
function isRoadNumber(tokens: readonly string[], at: number): boolean {
  if (!BEFORE_ROAD_NUMBER.has(canonical(tokens[at - 1]!))) return false;
  return tokens
    .slice(0, at - 1)
    .map(canonical)
    .every((word) => BEFORE_ROAD_NUMBER.has(word) || isDirection(word) || /^\d/.test(word));
}
