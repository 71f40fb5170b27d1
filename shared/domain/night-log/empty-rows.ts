import { isWholeWhen, readWhen } from './local-time';
import type { DateSaid } from './local-time';
import { plain, saysNothing } from './plain-text';

/** Why a row holds no call, in words; null when it may hold one. */
export function whyEmpty(
  cells: readonly string[],
  header: readonly string[] | null,
): string | null {
  const said = cells.filter((cell) => cell.trim() !== '');
  if (said.length === 0) return 'an empty row';
  if (said.every((cell) => saysNothing(cell) || /^[\s=*_~#+-]+$/.test(cell)))
    return 'a row of blanks and rules';
  if (header && repeatsHeader(cells, header)) return 'the titles again';
  const text = plain(said.join(' ')).replace(/^[\s*=_~#<>[(-]+|[\s*=_~#<>\])-]+$/g, '');
  if (said.length <= 3 && FURNITURE.test(text)) return 'a heading or footer of the report';
  if (said.length <= 4 && TOTAL.test(text) && !/\d{3}\D{0,3}\d{4}/.test(text))
    return 'a line of totals';
  if (said.length <= 2 && dayLine(cells)) return 'a date on a line of its own';
  return null;
}

/** The day that a line names when it holds nothing else. */
export function dayLine(cells: readonly string[]): DateSaid | null {
  const said = cells.filter((cell) => cell.trim() !== '');
  if (said.length === 0 || said.length > 2) return null;
  const text = said
    .join(' ')
    .replace(
      /^[\s*=_#-]+|[\s*=_#-]+$|^\s*(?:date|day|calls? (?:for|of)|log (?:for|of))\s*:?/gi,
      ' ',
    );
  if (!isWholeWhen(text)) return null;
  const when = readWhen(text);
  return when.clock || !when.date || when.date.kind === 'relative' ? null : when.date;
}

function repeatsHeader(cells: readonly string[], header: readonly string[]): boolean {
  const titles = titlesOf(header);
  let said = 0;
  let same = 0;
  for (const cell of cells) {
    if (cell.trim() === '') continue;
    said++;
    if (titles.has(plain(cell))) same++;
    // Three cells that are no titles settle it for every row of a call.
    if (same === 0 && said === 3) return false;
  }
  return said >= 2 && same >= said * 0.7 && same >= Math.min(3, titles.size);
}

const TITLES = new WeakMap<readonly string[], ReadonlySet<string>>();

function titlesOf(header: readonly string[]): ReadonlySet<string> {
  const known = TITLES.get(header);
  if (known) return known;
  const titles = new Set(header.map(plain).filter(Boolean));
  TITLES.set(header, titles);
  return titles;
}

const FURNITURE =
  /^(?:page \d+(?: ?(?:of|\/) ?\d+)?|pg\.? ?\d+.*|.{0,60}\bpage \d+(?: ?(?:of|\/) ?\d+)?|(?:\*+ ?)?end(?: of)?(?: (?:the |this )?(?:log|report|file|list|messages?|calls?|shift|data|record|page))?(?: \w+)?|fin(?: del (?:registro|informe|reporte))?|(?:printed|generated|exported|report (?:run|date|generated|printed)|run date|run time|created)\b.{0,60}|continued(?: (?:on|from)\b.*)?|\(?cont(?:'?d|inued)?\.?\)?|confidential.{0,80}|.{0,50}answering (?:service|svc).{0,60}|.{0,40}(?:call|message) log(?: .{0,40})?|eof|---+)$/;
const TOTAL =
  /^(?:(?:grand |sub)?totals?\b.{0,60}|.{0,30}\btotals?:? ?\d+.{0,20}|\d+ (?:calls?|messages?|records?|rows?|items?|entries|llamadas)(?: (?:total|taken|received|logged|recibidas))?\.?|(?:calls?|messages?|records?|count|number of calls|no\.? of calls|msgs?)(?: (?:taken|received|total|count))? ?[:=]? ?\d+|total de llamadas.*)$/;
