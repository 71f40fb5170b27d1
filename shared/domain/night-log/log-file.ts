/** One record of a night log with its cells as they stood in the file. */
export interface LogRow {
  /** The line of the file on which the record begins, from 1. */
  readonly line: number;
  readonly cells: readonly string[];
}

/** A night log cut into cells, with nothing interpreted yet. */
export interface NightLogFile {
  /** The titles of the columns; null when the log has none. */
  readonly header: readonly string[] | null;
  readonly headerLine: number | null;
  /** What stood above the titles, such as "Calls for 12/01/2026". */
  readonly titles: readonly LogRow[];
  /** Every other record, empty ones too. */
  readonly rows: readonly LogRow[];
  readonly encoding: 'utf-8' | 'utf-8-bom' | 'windows-1252' | 'utf-16' | 'mixed';
  readonly delimiter: ',' | ';' | '\t' | '|';
  /** What had to be mended on the way, in words. */
  readonly notes: readonly string[];
}
