import type { LocalDateTime } from '@shared/domain/night-log/local-time';
import type { SeededRandom } from '@shared/domain/planner/random';
import type { LogStyle } from './log-style';
import type { LogAddress } from './make-night-log';

const two = (n: number): string => String(n).padStart(2, '0');
const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'];

export function writeTime({ hour, minute }: LocalDateTime, clock: LogStyle['clock']): string {
  const twelve = hour % 12 === 0 ? 12 : hour % 12;
  switch (clock) {
    case '12h-short':
      return `${twelve}:${two(minute)}${hour < 12 ? 'a' : 'p'}`;
    case '12h-long':
      return `${twelve}:${two(minute)} ${hour < 12 ? 'AM' : 'PM'}`;
    case '24h':
      return `${two(hour)}:${two(minute)}`;
    case '24h-compact':
      return `${two(hour)}${two(minute)}`;
    case '24h-dot':
      return `${hour}.${two(minute)}`;
  }
}

export function writeDate({ year, month, day }: LocalDateTime, style: LogStyle['date']): string {
  switch (style) {
    case 'none':
      return '';
    case 'month-day':
      return `${month}/${day}`;
    case 'iso':
      return `${year}-${two(month)}-${two(day)}`;
    case 'named-month':
      return `${two(day)}-${MONTHS[month - 1] ?? ''}-${two(year % 100)}`;
    case 'own-column':
    case 'slashes':
    case 'where-it-changes':
      return `${two(month)}/${two(day)}/${year}`;
  }
}

export function writeName(
  first: string,
  last: string,
  style: LogStyle['name'],
): { callerName: string; firstName: string; lastName: string } {
  const whole =
    style === 'last-comma-first'
      ? `${last}, ${first}`
      : style === 'capitals'
        ? `${last}, ${first}`.toUpperCase()
        : `${first} ${last}`;
  return { callerName: whole, firstName: first, lastName: last };
}

/** Twelve spellings; seven digits only for the region's own area code. */
export function writePhone(e164: string, spelling: number, areaCode = '252'): string {
  const area = e164.slice(2, 5);
  const exchange = e164.slice(5, 8);
  const line = e164.slice(8);
  switch (spelling) {
    case 0:
      return `(${area}) ${exchange}-${line}`;
    case 1:
      return `${area}-${exchange}-${line}`;
    case 2:
      return `${area}.${exchange}.${line}`;
    case 3:
      return `+1 ${area} ${exchange} ${line}`;
    case 4:
      return `${area}${exchange}${line}`;
    case 5:
      return `1-${area}-${exchange}-${line}`;
    case 6:
      return `${area}-${exchange}-${line} x12`;
    case 7:
      return `${area} ${exchange}${line}`;
    case 8:
      return `tel:${e164}`;
    case 9:
      return area === areaCode ? `${exchange}-${line}` : `(${area})${exchange}-${line}`;
    case 10:
      return `call after 6: ${area}-${exchange}-${line}`;
    default:
      return `${area} ${exchange} ${line}`;
  }
}

export function writeAddress(
  address: LogAddress,
  style: LogStyle['address'],
  random: SeededRandom,
  mistype: (street: string) => string,
): {
  address: string;
  streetNumber: string;
  street: string;
  unitNo: string;
  city: string;
  postcode: string;
} {
  const street = mistype(address.street);
  const line = `${address.number} ${street}`;
  const unit = address.unit ?? '';
  const unitText =
    unit === '' ? '' : [` Apt ${unit}`, ` #${unit}`, `, Unit ${unit}`][random.below(3)];
  const whole = `${line}${unitText}, ${address.city}${random.below(2) === 0 ? ` ${address.postcode}` : ''}`;
  return {
    address: style === 'whole' ? whole : line,
    streetNumber: address.number,
    street,
    unitNo: unit,
    city: address.city,
    postcode: address.postcode,
  };
}

/** Two neighbouring letters of one longer word change places, or one is left out. */
export function typo(text: string, random: SeededRandom): string {
  const words = text.split(' ');
  const long = words.flatMap((word, i) => (/^[a-z]{5,}$/i.test(word) ? [i] : []));
  const at = long[random.below(Math.max(long.length, 1))];
  const word = at === undefined ? undefined : words[at];
  if (at === undefined || word === undefined) return text;
  const letter = 1 + random.below(word.length - 2);
  words[at] =
    random.below(2) === 0
      ? word.slice(0, letter) + word.slice(letter + 1)
      : word.slice(0, letter) +
        (word[letter + 1] ?? '') +
        (word[letter] ?? '') +
        word.slice(letter + 2);
  return words.join(' ');
}

export function quoteCell(cell: string, style: LogStyle): string {
  const needed = cell.includes(style.delimiter) || /["\r\n]/.test(cell);
  if (!needed && (style.quotes === 'where-needed' || cell === '')) return cell;
  return `"${cell.replace(/"/g, '""')}"`;
}

/** Every letter of the invented names lies in Latin-1, where Windows-1252 agrees with it. */
export function encodeLog(text: string, encoding: LogStyle['encoding']): Uint8Array {
  if (encoding === 'utf-8') return new TextEncoder().encode(text);
  if (encoding === 'utf-8-bom') return new TextEncoder().encode(`\ufeff${text}`);
  return Uint8Array.from([...text], (letter) => {
    const code = letter.charCodeAt(0);
    if (code > 0xff) throw new Error(`"${letter}" cannot be written in Windows-1252 here`);
    return code;
  });
}
