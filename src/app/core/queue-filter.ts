import type { CallRow } from '@shared/contract/calls';
import type { CallState } from '@shared/domain/call-state';
import type { CompartmentKind } from '@shared/domain/cold-unit';
import type { Skill } from '@shared/domain/skills';

/** What the dispatcher wants to see, on the queue and on the map alike. Empty lists mean "any". */
export interface QueueFilter {
  /** Words that must all be found in the number, name, phone or address. */
  readonly text: string;
  readonly states: readonly CallState[];
  /** Calls with at least one compartment of these kinds. */
  readonly contents: readonly CompartmentKind[];
  /** Calls whose visit asks for all of these. */
  readonly skills: readonly Skill[];
  readonly areaId: string | null;
  /** The calls of one pocket, by its key. */
  readonly pocketKey: string | null;
  /** Only calls in which somebody may be in danger. */
  readonly dangerOnly: boolean;
  /** Only calls with texts that nobody has read. */
  readonly unreadOnly: boolean;
}

export const NO_FILTER: QueueFilter = {
  text: '',
  states: [],
  contents: [],
  skills: [],
  areaId: null,
  pocketKey: null,
  dangerOnly: false,
  unreadOnly: false,
};

export const isFiltering = (filter: QueueFilter): boolean =>
  filter.text.trim() !== '' ||
  filter.states.length > 0 ||
  filter.contents.length > 0 ||
  filter.skills.length > 0 ||
  filter.areaId !== null ||
  filter.pocketKey !== null ||
  filter.dangerOnly ||
  filter.unreadOnly;

/** Makes the test for one filter, so that what is common to all calls is done once. */
export function matcher(
  filter: QueueFilter,
  /** The calls of the pocket that the filter names; `null` when it names none. */
  pocketCallIds: ReadonlySet<string> | null,
): (call: CallRow) => boolean {
  const words = plain(filter.text).split(/\s+/).filter(Boolean);
  return (call) =>
    (filter.states.length === 0 || filter.states.includes(call.state)) &&
    (filter.areaId === null || call.areaId === filter.areaId) &&
    (!filter.dangerOnly || call.danger) &&
    (!filter.unreadOnly || call.unreadTexts > 0) &&
    (pocketCallIds === null || pocketCallIds.has(call.id)) &&
    filter.skills.every((skill) => call.skills.includes(skill)) &&
    (filter.contents.length === 0 || hasContents(call, filter.contents)) &&
    (words.length === 0 || hasWords(call, words));
}

const hasContents = (call: CallRow, kinds: readonly CompartmentKind[]): boolean =>
  call.units.some((unit) => unit.compartments.some((c) => kinds.includes(c.kind)));

function hasWords(call: CallRow, words: readonly string[]): boolean {
  const text = plain(`${call.number} ${call.name} ${call.address.text} ${call.address.unitNo}`);
  const digits = call.phone ?? '';
  return words.every((word) => text.includes(word) || matchesPhone(digits, word));
}

/** `555-0142` and `5550142` both find +12525550142; one or two digits are a call number. */
function matchesPhone(phone: string, word: string): boolean {
  const typed = word.replace(/[-().+]/g, '');
  return /^\d{3,}$/.test(typed) && phone.includes(typed);
}

/** Lower case and without accents, so that "pena" finds "Peña". */
const plain = (text: string): string =>
  text
    .normalize('NFD')
    .replace(/\p{Mn}/gu, '')
    .toLowerCase();
