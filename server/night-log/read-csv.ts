import { shapeOf } from '@shared/domain/night-log/cell-shapes';
import { titlesIn } from '@shared/domain/night-log/guess-columns';
import type { LogRow, NightLogFile } from '@shared/domain/night-log/log-file';
import { saysNothing } from '@shared/domain/night-log/plain-text';
import { decodeLog } from './decode-log';
import { splitRecords, usualWidth } from './split-records';
import type { Record } from './split-records';

const DELIMITERS = [',', ';', '\t', '|'] as const;
type Delimiter = (typeof DELIMITERS)[number];

/** Titles stand within so many records of the top, or nowhere. */
const HEADER_WITHIN = 30;

/** Reads a night log's bytes into cells. Nothing is dropped: what cannot be cut stays one cell. */
export function readCsv(bytes: Uint8Array): NightLogFile {
  const decoded = decodeLog(bytes);
  const notes = [...decoded.notes];
  let text = decoded.text;
  let delimiter: Delimiter | null = null;
  let skippedLines = 0;
  const separator = /^"?sep=(.)"?[ \t]*(?:\r\n|\n|\r)/i.exec(text);
  if (separator) {
    delimiter = DELIMITERS.find((candidate) => candidate === separator[1]) ?? null;
    text = text.slice(separator[0].length);
    skippedLines = 1;
  }
  delimiter ??= guessDelimiter(text);
  const width = usualWidth(text, delimiter);
  let records = splitRecords(text, delimiter, width);
  records = unwrap(records, delimiter, width, notes);

  const header = findHeader(records);
  const expected = header?.cells.length ?? width;
  const below = rejoin(
    header ? records.slice(records.indexOf(header) + 1) : records,
    expected,
    delimiter,
    notes,
  );
  const above = header ? records.slice(0, records.indexOf(header)) : [];
  const toRow = ({ line, cells }: Record): LogRow => ({ line: line + skippedLines, cells });
  // A call that stands above the titles is still a call.
  const callsAbove = above.filter(
    ({ cells }) => cells.some((cell) => shapeOf(cell) === 'phone') && cells.length >= expected / 2,
  );
  return {
    header: header ? header.cells.map((cell) => cell.trim()) : null,
    headerLine: header ? header.line + skippedLines : null,
    titles: above.filter((record) => !callsAbove.includes(record) && !isBlank(record)).map(toRow),
    rows: [...callsAbove, ...below].map(toRow),
    encoding: decoded.encoding,
    delimiter,
    notes,
  };
}

function guessDelimiter(text: string): Delimiter {
  const head = text.slice(0, 60_000);
  let best: Delimiter = ',';
  let bestScore = -1;
  for (const delimiter of DELIMITERS) {
    const width = usualWidth(head, delimiter);
    if (width < 2) continue;
    const records = splitRecords(head, delimiter, width, 120).filter((record) => !isBlank(record));
    const fitting = records.filter(({ cells }) => cells.length === width).length;
    const titled = Math.max(
      0,
      ...records.slice(0, HEADER_WITHIN).map(({ cells }) => titlesIn(cells)),
    );
    const score = (fitting / Math.max(records.length, 1)) * Math.sqrt(width) + titled;
    if (score > bestScore) {
      best = delimiter;
      bestScore = score;
    }
  }
  return best;
}

function findHeader(records: readonly Record[]): Record | null {
  let best: Record | null = null;
  let most = 0;
  for (const record of records.slice(0, HEADER_WITHIN)) {
    const titles = titlesIn(record.cells);
    if (titles > most) {
      best = record;
      most = titles;
    }
  }
  return best;
}

/** A row that a spreadsheet put into one pair of quotes is cut again. */
function unwrap(records: Record[], delimiter: string, width: number, notes: string[]): Record[] {
  if (width < 3) return records;
  let wrapped = 0;
  const result = records.map((record) => {
    const [only, ...more] = record.cells;
    const rest = more.every((cell) => cell === '');
    if (only === undefined || !rest || !only.includes(delimiter)) return record;
    const again = splitRecords(only, delimiter, 0);
    const cells = again.length === 1 ? again[0]?.cells : undefined;
    if (!cells || Math.abs(cells.length - width) > 1) return record;
    wrapped++;
    return { line: record.line, cells };
  });
  if (wrapped > 0) notes.push(`${wrapped} rows were quoted as a whole and were cut again`);
  return result;
}

/** A message with a line break and no quotes leaves two short records that make one whole one. */
function rejoin(
  records: readonly Record[],
  width: number,
  delimiter: string,
  notes: string[],
): Record[] {
  if (width < 3) return [...records];
  const result: Record[] = [];
  let joined = 0;
  for (let i = 0; i < records.length; i++) {
    const first = records[i];
    if (!first) break;
    let cells = first.cells;
    let next = records[i + 1];
    while (
      next &&
      !isBlank(next) &&
      cells.length < width &&
      cells.length + next.cells.length - 1 <= width &&
      (cells.length + next.cells.length - 1 === width || next.cells.length === 1) &&
      cells.some((cell) => ['phone', 'time', 'date-time'].includes(shapeOf(cell) ?? '')) &&
      continues(next)
    ) {
      const last = cells[cells.length - 1] ?? '';
      cells = [...cells.slice(0, -1), `${last}\n${next.cells[0] ?? ''}`, ...next.cells.slice(1)];
      joined++;
      next = records[++i + 1];
    }
    result.push(cells === first.cells ? first : { line: first.line, cells });
  }
  if (joined > 0)
    notes.push(`${joined} line breaks inside messages were closed (delimiter "${delimiter}")`);
  return result;
}

/** Half a record: it begins with words and holds nothing that a call of its own would. */
function continues(record: Record): boolean {
  const [first = '', ...rest] = record.cells;
  if (saysNothing(first) || /^\s*\d/.test(first) || /^\s*[*=#-]{2}/.test(first)) return false;
  if (/^\s*(?:page\b|total|end of|printed|report)/i.test(first)) return false;
  if (['phone', 'time', 'date', 'date-time', 'address'].includes(shapeOf(first) ?? ''))
    return false;
  return !rest.some((cell) => ['phone', 'date-time', 'address'].includes(shapeOf(cell) ?? ''));
}

const isBlank = ({ cells }: Record): boolean => cells.every((cell) => cell.trim() === '');
