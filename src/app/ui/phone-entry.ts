import { readPhone } from '@shared/domain/phone-number';

/** Numbers without their area code, of a caller who lives around the corner. */
const LOCAL_DIGITS = 7;

const digitsOf = (text: string): string => text.replace(/\D/g, '');

/** The three digits before a number of seven, from the company's own number; `null` where it has none. */
export const areaCodeOf = (e164: string | null | undefined): string | null =>
  /^\+1(\d{3})\d{7}$/.exec(e164 ?? '')?.[1] ?? null;

/**
 * The number as the world writes it (E.164), once enough has been typed to know it.
 *
 * @param areaCode completes seven digits; without it they are no number
 */
export function phoneOf(typed: string, areaCode: string | null = null): string | null {
  const reading = readPhone(typed, { areaCode });
  return reading.kind === 'number' && reading.rest === '' ? reading.number.e164 : null;
}

/** Whether the number that was understood has an area code that nobody typed. */
export const isAreaCodeAssumed = (typed: string, areaCode: string | null): boolean =>
  phoneOf(typed) === null && phoneOf(typed, areaCode) !== null;

/** Why the text is no number yet, in words that say what to do; '' when it is one. */
export function phoneTrouble(typed: string, areaCode: string | null = null): string {
  const reading = readPhone(typed, { areaCode });
  if (reading.kind === 'number' && !/\d/.test(reading.rest))
    return reading.rest === '' ? '' : `Only the number here, without "${reading.rest}".`;
  if (typed.trim() === '') return 'A number is needed.';
  const count = digitsOf(typed).length;
  if (count === LOCAL_DIGITS && areaCode === null)
    return 'Its area code is missing, as in 252 555 0142.';
  if ([LOCAL_DIGITS, 10, 11].includes(count)) return 'No such number can exist: ask for it again.';
  const needed = areaCode === null ? 'ten with the area code' : 'ten, or seven near here';
  return `${count} ${count === 1 ? 'digit' : 'digits'}; a number has ${needed}.`;
}

/**
 * What is typed so far in the groups in which it is read back: 555-0142, (252) 555-0142. Anything but
 * digits and what stands between them is left as it was typed.
 */
export function groupedPhone(typed: string): string {
  const digits = digitsOf(typed);
  if (digits === '' || digits.length > 10 || /[^\d\s().-]/.test(typed)) return typed;
  // An area code or an exchange never begins with these; a country code is typed as it is said.
  if (/^[01]/.test(digits)) return typed;
  if (digits.length < 4) return digits;
  if (digits.length <= LOCAL_DIGITS) return `${digits.slice(0, 3)}-${digits.slice(3)}`;
  return `(${digits.slice(0, 3)}) ${digits.slice(3, 6)}-${digits.slice(6)}`;
}
