import type { SeededRandom } from '@shared/domain/planner/random';
import { TITLES } from './log-words';
import type { TitledField } from './log-words';

/** How one answering service writes its log. */
export interface LogStyle {
  readonly delimiter: ',' | ';' | '\t' | '|';
  readonly encoding: 'utf-8' | 'utf-8-bom' | 'windows-1252';
  readonly newline: '\n' | '\r\n';
  readonly quotes: 'where-needed' | 'always';
  readonly hasHeader: boolean;
  readonly titleLines: boolean;
  readonly footers: boolean;
  readonly order: 'oldest-first' | 'newest-first';
  /** '24h' may be compact; '12h-bare' leaves a and p to the reader. */
  readonly clock: '12h-short' | '12h-long' | '24h' | '24h-compact' | '24h-dot';
  readonly date:
    'none' | 'own-column' | 'month-day' | 'slashes' | 'iso' | 'named-month' | 'where-it-changes';
  readonly name: 'first-last' | 'last-comma-first' | 'two-columns' | 'capitals';
  readonly address: 'whole' | 'street-and-city' | 'split';
  readonly units: 'column' | 'in-message';
  readonly power: 'columns' | 'in-message' | 'none';
  readonly medicineColumn: boolean;
  readonly languageColumn: boolean;
  /** The columns in order. */
  readonly fields: readonly TitledField[];
  readonly titles: readonly string[];
}

export type StyleWish = Partial<Omit<LogStyle, 'fields' | 'titles'>>;

/** Draws a service's way of writing. What `wish` names is kept. */
export function drawStyle(random: SeededRandom, wish: StyleWish = {}): LogStyle {
  const one = <T>(...choices: readonly T[]): T => {
    const chosen = choices[random.below(choices.length)];
    if (chosen === undefined) throw new Error('nothing to choose from');
    return chosen;
  };
  const base: Omit<LogStyle, 'fields' | 'titles'> = {
    delimiter: one(',', ',', ',', ';', '\t', '|'),
    encoding: one('utf-8', 'utf-8-bom', 'windows-1252'),
    newline: one('\n', '\r\n'),
    quotes: one('where-needed', 'where-needed', 'always'),
    hasHeader: one(true, true, true, true, true, false),
    titleLines: one(true, false),
    footers: one(true, false),
    order: one('oldest-first', 'oldest-first', 'newest-first'),
    clock: one('12h-short', '12h-long', '24h', '24h-compact', '24h-dot'),
    date: one(
      'none',
      'own-column',
      'month-day',
      'slashes',
      'iso',
      'named-month',
      'where-it-changes',
    ),
    name: one('first-last', 'last-comma-first', 'two-columns', 'capitals'),
    address: one('whole', 'street-and-city', 'split'),
    units: one('column', 'column', 'in-message'),
    power: one('columns', 'in-message', 'none'),
    medicineColumn: one(true, false, false),
    languageColumn: one(true, false, false),
    ...wish,
  };
  const fields = fieldsOf(base, random);
  const titles = fields.map((field) => one(...TITLES[field]));
  return { ...base, fields, titles };
}

function fieldsOf(style: Omit<LogStyle, 'fields' | 'titles'>, random: SeededRandom): TitledField[] {
  // Blocks stay together, as on a form; the blocks come in any order.
  const blocks: TitledField[][] = [
    style.date === 'own-column' || style.date === 'where-it-changes'
      ? ['receivedDate', 'receivedTime']
      : style.date === 'none'
        ? ['receivedTime']
        : ['receivedAt'],
    style.name === 'two-columns'
      ? // Without titles nobody could tell which of the two is which.
        style.hasHeader && random.below(2) === 0
        ? ['lastName', 'firstName']
        : ['firstName', 'lastName']
      : ['callerName'],
    ['phone'],
    style.address === 'whole'
      ? ['address']
      : style.address === 'street-and-city'
        ? ['address', 'unitNo', 'city', 'postcode']
        : ['streetNumber', 'street', 'unitNo', 'city', 'postcode'],
    style.units === 'column' ? ['unitKind', 'remarks'] : ['remarks'],
  ];
  if (style.power === 'columns') blocks.push(['powerOutAt', 'powerBackAt']);
  // A bare yes or no means nothing without a title above it.
  if (style.medicineColumn && style.hasHeader) blocks.push(['medicine']);
  if (style.languageColumn) blocks.push(['language']);
  if (random.below(2) === 0) blocks.push(['callId']);
  if (random.below(2) === 0) blocks.push(['operator']);
  if (random.below(3) === 0) blocks.push(['altPhone']);
  for (let i = blocks.length - 1; i > 0; i--) {
    const j = random.below(i + 1);
    const [a, b] = [blocks[i], blocks[j]];
    if (a && b) [blocks[i], blocks[j]] = [b, a];
  }
  return blocks.flat();
}
