/**
 * Cuts delimited text into records, and gives each record the line on which it begins.
 *
 * Well-formed files are read as RFC 4180 says. It exists beside csv-parse because that library, told to
 * be lenient, still takes a quote that nobody closed for one cell that reaches to the end of the file:
 * every call below it would be lost. Here such a quote is a letter like any other.
 */
export interface Record {
  readonly line: number;
  readonly cells: string[];
}

/** No message of an answering service runs over more lines than this. */
const MOST_LINES = 60;

interface Parsed {
  readonly cells: string[];
  readonly end: number;
  readonly newlines: number;
  /** The most delimiters that one line of a quoted cell holds. */
  readonly delimitersInside: number;
}

/**
 * @param width how many cells a record should have; 0 when that is not known yet
 * @param limit stop after so many records
 */
export function splitRecords(
  text: string,
  delimiter: string,
  width: number,
  limit = Infinity,
): Record[] {
  const records: Record[] = [];
  let at = 0;
  let line = 1;
  while (at < text.length && records.length < limit) {
    let parsed = parseRecord(text, at, delimiter, false);
    if (parsed.newlines > 0 && width > 1) {
      // A stray quote swallows the next call; a real message over several lines does not look like one.
      const swallows = parsed.delimitersInside >= width - 1;
      const plain = parseRecord(text, at, delimiter, true);
      const closer = Math.abs(plain.cells.length - width) < Math.abs(parsed.cells.length - width);
      if (swallows || closer) parsed = plain;
    }
    records.push({ line, cells: parsed.cells });
    line += parsed.newlines + 1;
    at = parsed.end;
  }
  return records;
}

/**
 * The commonest number of cells in a record.
 *
 * Judged twice, with quotes trusted over line ends and with every line for itself: stray quotes spoil
 * the first, messages over several lines the second. The one that fits more records is right.
 */
export function usualWidth(text: string, delimiter: string): number {
  const head = text.slice(0, 200_000);
  const trusting = splitRecords(head, delimiter, 0, 400).map(({ cells }) => cells);
  const lines = head
    .split(/\r\n|\n|\r/, 400)
    .map((line) => parseRecord(line, 0, delimiter, true).cells);
  const [byRecord, byLine] = [trusting, lines].map(commonest);
  const best = byRecord && byLine && byLine.share > byRecord.share ? byLine : byRecord;
  return best?.width ?? 1;
}

function commonest(records: readonly (readonly string[])[]): { width: number; share: number } {
  const counts = new Map<number, number>();
  let said = 0;
  for (const cells of records) {
    if (cells.every((cell) => cell.trim() === '')) continue;
    said++;
    if (cells.length > 1) counts.set(cells.length, (counts.get(cells.length) ?? 0) + 1);
  }
  const [width, count] = [...counts].sort((a, b) => b[1] - a[1] || b[0] - a[0])[0] ?? [1, 0];
  return { width, share: said === 0 ? 0 : count / said };
}

function parseRecord(
  text: string,
  start: number,
  delimiter: string,
  quotesStayOnLine: boolean,
): Parsed {
  const cells: string[] = [];
  let at = start;
  let newlines = 0;
  let delimitersInside = 0;
  for (;;) {
    const quoted = readQuoted(text, at, delimiter, quotesStayOnLine);
    if (quoted) {
      cells.push(quoted.value);
      newlines += quoted.newlines;
      delimitersInside = Math.max(delimitersInside, quoted.delimitersInside);
      at = quoted.end;
    } else {
      let end = at;
      while (end < text.length && !isNewline(text[end]) && text[end] !== delimiter) end++;
      cells.push(text.slice(at, end));
      at = end;
    }
    if (text[at] === delimiter) {
      at++;
      continue;
    }
    if (text[at] === '\r' && text[at + 1] === '\n') at++;
    return { cells, end: at + 1, newlines, delimitersInside };
  }
}

function readQuoted(
  text: string,
  start: number,
  delimiter: string,
  staysOnLine: boolean,
): { value: string; end: number; newlines: number; delimitersInside: number } | null {
  let at = start;
  while (text[at] === ' ') at++;
  if (text[at] !== '"') return null;
  at++;
  let value = '';
  let newlines = 0;
  let delimiters = 0;
  let delimitersInside = 0;
  for (; at < text.length; at++) {
    const letter = text[at];
    if (letter === '"') {
      const after = afterSpaces(text, at + 1);
      const closes = after >= text.length || text[after] === delimiter || isNewline(text[after]);
      if (text[at + 1] === '"') {
        value += '"';
        at++;
        continue;
      }
      if (closes) {
        return {
          value,
          end: after,
          newlines,
          delimitersInside: Math.max(delimitersInside, newlines > 0 ? delimiters : 0),
        };
      }
      value += letter;
      continue;
    }
    if (isNewline(letter)) {
      if (staysOnLine || ++newlines > MOST_LINES) return null;
      // The first line of the cell began with cells of its own record, so only later ones are counted.
      if (newlines > 1) delimitersInside = Math.max(delimitersInside, delimiters);
      delimiters = 0;
      if (letter === '\r' && text[at + 1] === '\n') at++;
      value += '\n';
      continue;
    }
    if (letter === delimiter) delimiters++;
    value += letter;
  }
  return null;
}

function afterSpaces(text: string, from: number): number {
  let at = from;
  while (text[at] === ' ') at++;
  return at;
}

const isNewline = (letter: string | undefined): boolean => letter === '\n' || letter === '\r';
