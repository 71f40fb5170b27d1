/** Words and figures; '&', '@', '#' and a hyphen between figures keep their meaning. */
export function tokensOf(text: string): string[] {
  return joinOrdinals(
    text
      .toLowerCase()
      .replace(/['.`\u2019]/g, '')
      .replace(/(\d)\s*[-\u2013]\s*(?=\d)/g, '$1-')
      .replace(/1\/2/g, ' half ')
      .replace(/([&@#])/g, ' $1 ')
      .replace(/\//g, ' & ')
      .split(/[^a-z0-9&@#-]+/)
      .map((token) => token.replace(/^-+|-+$/g, ''))
      .flatMap((token) => (/[a-z]-[a-z]/.test(token) ? token.split('-') : [token]))
      .filter((token) => token !== ''),
  );
}

/** Lower case, without accents, a half in two figures: what all reading begins with. */
export const plainText = (text: string): string =>
  text
    .replace(/\u00bd/g, ' 1/2 ')
    .normalize('NFKD')
    .replace(/[\u0300-\u036f]/g, '')
    .toLowerCase()
    // "Heron Street no. 12"; "no 3rd st" is north.
    .replace(/\b(?:no|nr|num|number)\b\.?\s*(?=\d+(?:-\d+)?[a-z]?(?:[\s,;]|$))/g, ' ')
    // "1210heron", typed without its space
    .replace(/\b(\d{2,6})(?=[a-z]{3,})(?!(?:st|nd|rd|th)\b)/g, '$1 ');

const UNITS = 'first second third fourth fifth sixth seventh eighth ninth'.split(' ');
const TEENS =
  'tenth eleventh twelfth thirteenth fourteenth fifteenth sixteenth seventeenth eighteenth nineteenth'.split(
    ' ',
  );
const TENS = 'twenty thirty forty fifty sixty seventy eighty ninety'.split(' ');

/** 'third' gives 3, 'twentieth' 20, 'twentyfirst' 21; null for what is no ordinal. */
export function ordinalOf(word: string): number | null {
  const unit = UNITS.indexOf(word);
  if (unit >= 0) return unit + 1;
  const teen = TEENS.indexOf(word);
  if (teen >= 0) return teen + 10;
  const ten = TENS.findIndex((tens) => word.startsWith(tens.slice(0, -1)));
  if (ten < 0) return null;
  const tens = TENS[ten]!;
  if (word === `${tens.slice(0, -1)}ieth`) return (ten + 2) * 10;
  const rest = UNITS.indexOf(word.slice(tens.length));
  return word.startsWith(tens) && rest >= 0 ? (ten + 2) * 10 + rest + 1 : null;
}

/** "twenty first" and "21 st" are one word; "21 st" before nothing is 21 Street. */
function joinOrdinals(tokens: readonly string[]): string[] {
  const joined: string[] = [];
  for (let i = 0; i < tokens.length; i++) {
    const token = tokens[i]!;
    const next = tokens[i + 1];
    const ordinal = next !== undefined && TENS.includes(token) ? ordinalOf(token + next) : null;
    if (ordinal !== null) joined.push(`${ordinal}th`);
    else if (next !== undefined && /^\d{1,3}$/.test(token) && isSuffix(next, tokens[i + 2]))
      joined.push(token + next);
    else {
      joined.push(token);
      continue;
    }
    i++;
  }
  return joined;
}

/** Whether a word after a figure is the figure's ending: "st" and "rd" only before a street's type. */
function isSuffix(word: string, after: string | undefined): boolean {
  if (word === 'nd' || word === 'th') return true;
  return (word === 'st' || word === 'rd') && after !== undefined && TYPES_AFTER.has(after);
}

const TYPES_AFTER: ReadonlySet<string> = new Set(
  'st street str ave av avenue rd road dr drive pl place ln lane ct court ter terrace blvd way'.split(
    ' ',
  ),
);
