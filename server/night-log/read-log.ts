import { guessColumns } from '@shared/domain/night-log/guess-columns';
import type { ColumnMap } from '@shared/domain/night-log/column-map';
import type { NightLogFile } from '@shared/domain/night-log/log-file';
import type { NightSpan } from '@shared/domain/night-log/night-clock';
import { understandLog, type NightLogReading } from '@shared/domain/night-log/understand-log';
import type { Instant } from '@shared/domain/instant';
import { readCsv } from './read-csv';
import { zoneClock } from './zone-clock';

/** A log to read, with what the reader has to know of the storm. All of it can cross to a thread. */
export interface LogToRead {
  readonly bytes: Uint8Array;
  /** The columns as a person set them; `null` to guess. */
  readonly columns: ColumnMap | null;
  readonly zone: string;
  readonly night: NightSpan;
  readonly outage: { readonly from: Instant; readonly to: Instant | null } | null;
  readonly areaCode: string;
  readonly cities: readonly string[];
}

export interface LogRead {
  readonly file: Pick<NightLogFile, 'header' | 'encoding' | 'notes'>;
  readonly columns: ColumnMap;
  /** A few cells of each column, to recognise it by. */
  readonly samples: readonly (readonly string[])[];
  readonly reading: NightLogReading;
}

const SAMPLES = 3;

/** Reads a whole night log: cells, columns, calls. Seconds of work for thousands of rows. */
export function readLog(order: LogToRead): LogRead {
  const file = readCsv(order.bytes);
  const cells = file.rows.map((row) => row.cells);
  const columns = order.columns ?? guessColumns(file.header, cells);
  const reading = understandLog(file, columns, {
    zone: zoneClock(order.zone),
    night: order.night,
    outage: order.outage,
    areaCode: order.areaCode,
    cities: order.cities,
  });
  return {
    file: { header: file.header, encoding: file.encoding, notes: file.notes },
    columns,
    samples: columns.columns.map(({ index }) =>
      cells
        .map((row) => row[index]?.trim() ?? '')
        .filter((cell) => cell !== '')
        .slice(0, SAMPLES),
    ),
    reading,
  };
}
