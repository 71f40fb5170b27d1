import type { TakeCall } from '@shared/contract/calls';
import type { Instant } from '@shared/domain/instant';
import { phoneOf, phoneTrouble } from '../ui/phone-entry';
import type { IntakeDraft } from './intake-draft';
import { readTimeEntry } from './time-entry';

/** The fields that an error can stand beside. */
export const INTAKE_FIELDS = [
  'phone',
  'name',
  'address',
  'unitNo',
  'out',
  'back',
  'units',
  'remark',
  'form',
] as const;
export type IntakeField = (typeof INTAKE_FIELDS)[number];
export type IntakeErrors = Partial<Record<IntakeField, string>>;

export type IntakeChecked =
  | { readonly ready: true; readonly body: TakeCall }
  | { readonly ready: false; readonly errors: IntakeErrors };

/**
 * Turns a draft into the command, or says field by field what is still missing.
 *
 * @param zone the region's time zone, an IANA name
 * @param areaCode the company's, for numbers that callers give without one
 */
export function checkIntake(
  draft: IntakeDraft,
  now: Instant,
  zone: string,
  areaCode: string | null,
): IntakeChecked {
  const errors: IntakeErrors = {};
  const phone = phoneOf(draft.phone, areaCode);
  if (phone === null) {
    errors.phone =
      draft.phone.trim() === ''
        ? 'A number to ring back is needed.'
        : phoneTrouble(draft.phone, areaCode);
  }
  const name = draft.name.trim();
  if (name === '') errors.name = 'Who is calling?';
  const text = draft.address.text.trim();
  if (text === '') errors.address = 'An address, or a point on the map.';
  if (draft.units.length === 0) errors.units = 'Add the unit that stays warm.';

  const { times } = draft;
  const outAt = timeOrError(times.outText, times.outAt, now, zone, (why) => (errors.out = why));
  if (outAt === null) errors.out ??= 'When did the power go? A guess will do.';
  let backAt: Instant | null = null;
  if (!times.stillOut) {
    backAt = timeOrError(times.backText, times.backAt, now, zone, (why) => (errors.back = why));
    if (backAt === null) errors.back ??= 'When did it come back? Or tick "still out".';
    else if (outAt !== null && backAt < outAt) errors.back = 'That is before the power went.';
  }

  if (Object.keys(errors).length > 0 || phone === null || outAt === null) {
    return { ready: false, errors };
  }
  return {
    ready: true,
    body: {
      commandId: draft.commandId,
      callId: draft.callId,
      phone,
      name,
      address: { ...draft.address, text, unitNo: draft.address.unitNo.trim() },
      language: draft.language,
      mayText: draft.mayText,
      powerOutAt: outAt,
      powerBackAt: backAt,
      powerOnSpans: [...draft.powerOnSpans],
      timesFrom: times.from,
      householdAtRisk: draft.householdAtRisk,
      units: [...draft.units],
      remark: draft.remark.trim(),
      danger: draft.danger,
    },
  };
}

/** The moment fixed when it was typed; "4 h ago" must not drift while the form stays open. */
function timeOrError(
  text: string,
  fixed: Instant | null,
  now: Instant,
  zone: string,
  refuse: (why: string) => void,
): Instant | null {
  if (fixed !== null) return fixed;
  const entry = readTimeEntry(text, now, zone);
  if (entry.kind === 'unreadable') refuse(entry.why);
  return entry.kind === 'moment' ? entry.at : null;
}

/** Where the form shows what the server says about a part of the command (RFC 6901 pointers). */
export function fieldOfPointer(pointer: string): IntakeField {
  const [first = '', second = ''] = pointer.replace(/^#?\//, '').split('/');
  switch (first) {
    case 'phone':
    case 'name':
    case 'units':
    case 'remark':
      return first;
    case 'address':
      return second === 'unitNo' ? 'unitNo' : 'address';
    case 'powerOutAt':
      return 'out';
    case 'powerBackAt':
    case 'powerOnSpans':
      return 'back';
    default:
      return 'form';
  }
}

/** The server's complaints beside the fields that they are about; two about one field join. */
export function errorsOfPointers(complaints: ReadonlyMap<string, string>): IntakeErrors {
  const errors: IntakeErrors = {};
  for (const [pointer, detail] of complaints) {
    const field = fieldOfPointer(pointer);
    errors[field] = errors[field] ? `${errors[field]} ${detail}` : detail;
  }
  return errors;
}
