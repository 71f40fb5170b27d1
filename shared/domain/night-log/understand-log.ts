import type { Instant } from '../instant';
import { alignRow } from './align-row';
import { cellsOf } from './column-map';
import type { ColumnMap, ColumnRole } from './column-map';
import { dayLine, whyEmpty } from './empty-rows';
import { foldDuplicates } from './fold-duplicates';
import type { Household } from './fold-duplicates';
import { readWhen } from './local-time';
import type { DateSaid, WhenSaid } from './local-time';
import type { LogRow, NightLogFile } from './log-file';
import type { RowReading, RowResult } from './night-call';
import { dateOrder, daysOf, placeNight } from './night-clock';
import type { NightSpan, ReceivedSaid, ZoneClock } from './night-clock';
import { plain, saysDitto, saysNothing } from './plain-text';
import { rowKeys } from './row-key';
import { understandRow } from './understand-row';

export interface NightContext {
  readonly zone: ZoneClock;
  /** When the calls of this log can have come in: the storm's opening until now, or the log's own night. */
  readonly night: NightSpan;
  /** When the storm took the power, if that is known. */
  readonly outage?: { readonly from: Instant; readonly to: Instant | null } | null;
  /** Put before numbers of seven digits. */
  readonly areaCode?: string | null;
  readonly cities?: readonly string[];
}

export interface NightLogReading {
  /** Every row of the file, in its order. */
  readonly rows: readonly RowReading[];
  /** One for each call to be made of the log, with the rows that belong to it. */
  readonly households: readonly Household[];
  readonly counts: {
    readonly rows: number;
    /** Rows that become a call of their own. */
    readonly calls: number;
    /** Rows that joined a call: the same household again, or the rest of a message. */
    readonly folded: number;
    readonly aside: number;
    readonly empty: number;
  };
}

/** Reads a whole night log. Each row ends as a call, in a call, set aside with a reason, or empty. */
export function understandLog(
  file: Pick<NightLogFile, 'header' | 'rows' | 'titles' | 'delimiter'>,
  map: ColumnMap,
  context: NightContext,
): NightLogReading {
  const prepared = prepare(file, map);
  const span = narrowed(context, file.titles);
  const said = prepared.map(({ said: one }) => one);
  const callRows = prepared.flatMap(({ kind }, i) => (kind === 'call' ? [i] : []));
  const calls = callRows.map((i) => said[i] ?? NOTHING_SAID);
  const placed = placeNight(calls, context.zone, span);
  const order = dateOrder(
    calls.map(({ when }) => when?.date ?? null),
    context.zone,
    span,
  );
  const is24 =
    calls.some(({ when }) => when?.clock?.style === '24h') &&
    !calls.some(({ when }) => when?.clock?.style === '12h');
  const keys = rowKeys(file.rows);

  const results: RowResult[] = prepared.map((row) => row.result ?? { kind: 'empty', reason: '' });
  callRows.forEach((i, n) => {
    const row = prepared[i];
    const received = placed[n];
    if (!row || !received) return;
    const setting = {
      received,
      power: { zone: context.zone, span, outage: context.outage ?? null, dateOrder: order, is24 },
      areaCode: context.areaCode ?? null,
      cities: context.cities ?? [],
    };
    const result = understandRow(row.cells, map, setting, row.further.join(' / '));
    results[i] =
      result.kind !== 'empty' && result.kind !== 'continued' && row.mended
        ? { ...result, call: { ...result.call, doubts: [...result.call.doubts, row.mended] } }
        : result;
  });

  const rows = file.rows.map((row, i) => ({
    line: row.line,
    cells: row.cells,
    key: keys[i] ?? '',
    result: results[i] ?? EMPTY,
  }));
  const households = foldDuplicates(rows);
  const count = (kind: RowResult['kind']): number =>
    rows.filter(({ result }) => result.kind === kind).length;
  const understood = count('understood');
  return {
    rows,
    households,
    counts: {
      rows: rows.length,
      calls: households.length,
      folded: understood - households.length + count('continued'),
      aside: count('aside'),
      empty: count('empty'),
    },
  };
}

const EMPTY: RowResult = { kind: 'empty', reason: 'an empty row' };
const NOTHING_SAID: ReceivedSaid = { when: null, dayAbove: null };

interface Prepared {
  readonly kind: 'call' | 'other';
  readonly cells: readonly string[];
  readonly mended: string | null;
  readonly said: ReceivedSaid;
  readonly further: string[];
  readonly result: RowResult | null;
}

/** Sorts out the rows that are no calls, and brings the others under their titles. */
function prepare(
  file: Pick<NightLogFile, 'header' | 'rows' | 'titles' | 'delimiter'>,
  map: ColumnMap,
): Prepared[] {
  const result: Prepared[] = [];
  let dayAbove = dayIn(file.titles);
  const datesAreSparse = isSparse(file.rows, map, 'receivedDate');
  let last: { row: Prepared; line: number } | null = null;
  for (const row of file.rows) {
    const empty = whyEmpty(row.cells, file.header);
    if (empty !== null) {
      dayAbove = dayLine(row.cells) ?? dayAbove;
      result.push(other({ kind: 'empty', reason: empty }, row.cells));
      continue;
    }
    const further = last ? restOfMessage(row, map) : null;
    if (last && further !== null) {
      last.row.further.push(further);
      result.push(other({ kind: 'continued', of: last.line }, row.cells));
      continue;
    }
    const aligned = alignRow(row.cells, map, file.delimiter);
    const cells = last ? repeated(aligned.cells, last.row.cells, map) : aligned.cells;
    const when = whenOf(cells, map);
    const prepared: Prepared = {
      kind: 'call',
      cells,
      mended: aligned.mended,
      said: { when, dayAbove },
      further: [],
      result: null,
    };
    if (datesAreSparse && when?.date) dayAbove = when.date;
    result.push(prepared);
    last = { row: prepared, line: row.line };
  }
  return result;
}

function whenOf(cells: readonly string[], map: ColumnMap): WhenSaid | null {
  const text = (['receivedAt', 'receivedDate', 'receivedTime'] as const)
    .flatMap((role) => cellsOf(map, cells, role))
    .map((cell) => cell.trim())
    .filter((cell) => !saysNothing(cell));
  const [first, second] = text;
  if (first === undefined) return null;
  if (second === undefined) return readWhen(first);
  const date = readWhen(first);
  const time = readWhen(second);
  return {
    date: date.date ?? time.date,
    // A spreadsheet gives the date cell a midnight of its own.
    clock: time.clock ?? date.clock,
    instant: time.instant ?? (time.clock ? null : date.instant),
    about: date.about || time.about,
    rest: `${date.rest} ${time.rest}`.trim(),
  };
}

const SPEAKING: ReadonlySet<ColumnRole> = new Set<ColumnRole>([
  'remarks',
  'detail',
  'contents',
  'unitKind',
]);

/** The text of a row that holds only more of the message above it; null for any other row. */
function restOfMessage(row: LogRow, map: ColumnMap): string | null {
  const said = row.cells.flatMap((cell, index) =>
    saysNothing(cell) ? [] : [{ cell: cell.trim(), index }],
  );
  const [only] = said;
  if (!only) return null;
  if (row.cells.length >= map.columns.length - 1) {
    const speaks = said.every(({ index }) => SPEAKING.has(map.columns[index]?.role ?? 'ignore'));
    const hasRemarks = said.some(({ index }) => map.columns[index]?.role === 'remarks');
    return speaks && hasRemarks && said.length <= 2
      ? said.map(({ cell }) => cell).join(' / ')
      : null;
  }
  const text = only.cell;
  const isSentence =
    said.length === 1 &&
    row.cells.length <= 2 &&
    /^[a-z(]/i.test(text) &&
    text.split(/\s+/).length >= 2;
  return isSentence && !/\d{3}[\s.)-]*\d{3}|\bshift\b|\boperator\b/i.test(text) ? text : null;
}

const REPEATABLE: ReadonlySet<ColumnRole> = new Set<ColumnRole>([
  'receivedAt',
  'receivedDate',
  'receivedTime',
  'callerName',
  'firstName',
  'lastName',
  'business',
  'phone',
  'address',
  'streetNumber',
  'street',
  'unitNo',
  'city',
  'state',
  'postcode',
  'unitKind',
  'powerOutAt',
  'powerBackAt',
  'language',
]);

/** Fills "same" and ditto marks from the row above. */
function repeated(
  cells: readonly string[],
  above: readonly string[],
  map: ColumnMap,
): readonly string[] {
  if (!cells.some(saysDitto)) return cells;
  return cells.map((cell, i) =>
    saysDitto(cell) && REPEATABLE.has(map.columns[i]?.role ?? 'ignore') ? (above[i] ?? cell) : cell,
  );
}

const PRINTED = /print|generat|report run|run date|export|creat/;

/** The day that the lines above the titles give the log. */
function dayIn(titles: readonly LogRow[]): DateSaid | null {
  for (const title of titles) {
    for (const cell of title.cells) {
      if (!cell || PRINTED.test(plain(cell))) continue;
      const { date } = readWhen(cell);
      if (date && date.kind !== 'relative' && date.kind !== 'weekday') return date;
    }
  }
  return null;
}

/** A storm may last for days; a log that names its night ends the day after. */
function narrowed(context: NightContext, titles: readonly LogRow[]): NightSpan {
  const { night, zone } = context;
  const day = dayIn(titles);
  const dayMs = 86_400_000;
  if (!day || night.to - night.from <= 1.5 * dayMs) return night;
  const [first] = daysOf(day, zone, night, dateOrder([day], zone, night));
  if (!first) return night;
  const from = zone.toInstant({ ...first, hour: 0, minute: 0 });
  const span = { from: Math.max(night.from, from), to: Math.min(night.to, from + 2 * dayMs) };
  return span.from < span.to ? span : night;
}

function isSparse(rows: readonly LogRow[], map: ColumnMap, role: ColumnRole): boolean {
  const column = map.columns.find((one) => one.role === role);
  if (!column) return false;
  const said = rows.filter(({ cells }) => !saysNothing(cells[column.index] ?? '')).length;
  return said > 0 && said < rows.length * 0.6;
}

const other = (result: RowResult, cells: readonly string[]): Prepared => ({
  kind: 'other',
  cells,
  mended: null,
  said: NOTHING_SAID,
  further: [],
  result,
});
