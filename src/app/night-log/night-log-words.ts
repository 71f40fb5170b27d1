import type { NightLogDto, NightLogRowView } from '@shared/contract/night-logs';
import type { ColumnRole } from '@shared/domain/night-log/column-map';
import type { IconName } from '../ui/icons';

/** Server and contract take no larger file. */
export const MOST_BYTES = 12 * 1024 * 1024;

/** What becomes of a row, as a shape and a word. */
export const OUTCOMES: Readonly<
  Record<NightLogRowView['outcome'], { readonly icon: IconName; readonly words: string }>
> = {
  call: { icon: 'call', words: 'A call' },
  folded: { icon: 'layers', words: 'Joins another' },
  aside: { icon: 'person', words: 'For a person' },
  empty: { icon: 'radio-button-unchecked', words: 'Empty' },
  known: { icon: 'check', words: 'Known already' },
  settled: { icon: 'check-circle', words: 'Settled' },
};

export const LOG_STATES: Readonly<
  Record<NightLogDto['state'], { readonly icon: IconName; readonly words: string }>
> = {
  read: { icon: 'hourglass-top', words: 'not imported yet' },
  importing: { icon: 'sync', words: 'being imported' },
  imported: { icon: 'check-circle', words: 'imported' },
  failed: { icon: 'error', words: 'stopped half-way' },
};

/** How sure the guess of a column is; a person's own choice is always sure. */
export function confidenceWords(confidence: number): string {
  if (confidence >= 0.8) return 'Sure';
  if (confidence >= 0.5) return 'Likely';
  return confidence >= 0.3 ? 'Perhaps' : 'A guess';
}

/** Whether a person should look at the guess before importing. */
export const isDoubtful = (confidence: number): boolean => confidence < 0.3;

/** What a log needs before its rows can be calls: one role of each line. */
const NEEDED: readonly { readonly roles: readonly ColumnRole[]; readonly words: string }[] = [
  { roles: ['phone', 'altPhone'], words: 'the phone' },
  { roles: ['callerName', 'firstName', 'lastName', 'business'], words: 'the name' },
  { roles: ['address', 'street'], words: 'the address' },
  { roles: ['unitKind', 'remarks'], words: 'the appliance or the message' },
];

/** Names what no column holds; empty when nothing is missing. */
export function missingWords(roles: readonly ColumnRole[]): string {
  const missing = NEEDED.filter((need) => !need.roles.some((role) => roles.includes(role)));
  if (missing.length === 0) return '';
  const words = missing.map((need) => need.words);
  const last = words.pop() ?? '';
  const list = words.length > 0 ? `${words.join(', ')} or ${last}` : last;
  return `No column holds ${list}.`;
}

const counted = (count: number, one: string, many: string): string =>
  `${count.toLocaleString('en-US')} ${count === 1 ? one : many}`;

export const rowWords = (count: number): string => counted(count, 'row', 'rows');

/** What the counts say, each with its shape. */
export function countWords(
  counts: NightLogDto['counts'],
): readonly { readonly key: string; readonly icon: IconName; readonly words: string }[] {
  return [
    { key: 'calls', icon: OUTCOMES.call.icon, words: counted(counts.calls, 'call', 'calls') },
    {
      key: 'folded',
      icon: OUTCOMES.folded.icon,
      words: counted(counts.folded, 'row joins another', 'rows join another'),
    },
    {
      key: 'aside',
      icon: OUTCOMES.aside.icon,
      words: `${counted(counts.aside, 'row', 'rows')} for a person`,
    },
    {
      key: 'known',
      icon: OUTCOMES.known.icon,
      words: `${counted(counts.known, 'row', 'rows')} known already`,
    },
    {
      key: 'empty',
      icon: OUTCOMES.empty.icon,
      words: `${counts.empty.toLocaleString('en-US')} empty`,
    },
  ];
}

/** Whether an import added or would add anything. */
export const isNothingNew = ({ calls, folded, aside }: NightLogDto['counts']): boolean =>
  calls + folded + aside === 0;

/** What an import came to, in a sentence or two. */
export function resultWords({ counts, rowCount }: NightLogDto): string {
  if (isNothingNew(counts)) {
    return `Nothing in it was new: ${
      counts.known === 0
        ? 'no row could be a call'
        : `all ${rowWords(counts.known)} were known already`
    }. Nothing has changed.`;
  }
  const calls = counted(counts.calls, 'call was taken', 'calls were taken');
  const folded =
    counts.folded > 0 ? `, ${counted(counts.folded, 'row', 'rows')} joined another` : '';
  const aside =
    counts.aside > 0
      ? ` ${counted(counts.aside, 'row waits', 'rows wait')} for a person.`
      : ' No row waits for a person.';
  const known =
    counts.known > 0 ? ` ${counted(counts.known, 'row was', 'rows were')} known already.` : '';
  return `Of ${rowWords(rowCount)}, ${calls}${folded}.${aside}${known}`;
}

/** The encoding as the person who exported the file may know it. */
export function encodingWords(encoding: string): string {
  const known: Readonly<Record<string, string>> = {
    'utf-8': 'UTF-8',
    'utf-8-bom': 'UTF-8 with a mark at its start',
    'windows-1252': 'Windows-1252',
    'utf-16le': 'UTF-16',
    'utf-16be': 'UTF-16',
  };
  return known[encoding.toLowerCase()] ?? encoding;
}
