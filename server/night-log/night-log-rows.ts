import type { ColumnGuess, NightLogDto, NightLogRowView } from '@shared/contract/night-logs';
import type { NightCall, RowReading } from '@shared/domain/night-log/night-call';
import { formatPhone } from '@shared/domain/phone-number';
import { UserRecord } from '../staff/user-record';
import type { NightLogRecord, NightLogRowRecord } from './night-log-record';
import type { LogRead } from './read-log';

export const NO_COUNTS: NightLogDto['counts'] = {
  calls: 0,
  folded: 0,
  aside: 0,
  empty: 0,
  known: 0,
};

export async function nightLogDto(log: NightLogRecord): Promise<NightLogDto> {
  const user = await UserRecord.findByPk(log.userId);
  return {
    id: log.id,
    stormId: log.stormId,
    fileName: log.fileName,
    state: log.state,
    uploadedAt: log.uploadedAt.getTime(),
    uploadedBy: user?.name ?? '',
    encoding: log.encoding,
    rowCount: log.rowCount,
    doneCount: log.doneCount,
    counts: log.counts,
    columns: JSON.parse(log.columns) as ColumnGuess[],
    trouble: log.trouble ?? null,
  };
}

export function columnGuesses({ columns, samples }: LogRead): ColumnGuess[] {
  return columns.columns.map((column, i) => ({
    index: column.index,
    header: column.header ?? `Column ${String(column.index + 1)}`,
    role: column.role,
    confidence: column.confidence,
    why: column.why,
    samples: [...(samples[i] ?? [])],
  }));
}

const PREVIEW_ROWS = 60;
const PREVIEW_ASIDES = 200;

/** Rows that the storm has already, by key, with the call that they went into. */
export type KnownRows = ReadonlyMap<string, string | null>;

/** What an import would come to. Calls that were taken by phone are only found while importing. */
export function previewCounts({ reading }: LogRead, known: KnownRows): NightLogDto['counts'] {
  const counts = { ...NO_COUNTS, empty: reading.counts.empty };
  for (const { rows } of reading.households) {
    const fresh = rows.filter(({ key }) => !known.has(key)).length;
    counts.known += rows.length - fresh;
    if (fresh === 0) continue;
    const calls = fresh === rows.length ? 1 : 0;
    counts.calls += calls;
    counts.folded += fresh - calls;
  }
  for (const { key, result } of reading.rows) {
    if (result.kind !== 'aside' && result.kind !== 'continued') continue;
    if (known.has(key)) counts.known += 1;
    else counts[result.kind === 'aside' ? 'aside' : 'folded'] += 1;
  }
  return counts;
}

/** What would become of the first rows, and of those that need a person. */
export function previewRows(
  logId: string,
  { reading }: LogRead,
  known: KnownRows,
): NightLogRowView[] {
  const folded = new Map<string, string>();
  for (const { rows } of reading.households)
    for (const { key, reason } of rows.slice(1))
      folded.set(key, `With line ${String(rows[0]?.line)}: ${reason ?? ''}`);
  const isAside = (row: RowReading): boolean => row.result.kind === 'aside' && !known.has(row.key);
  const asides = reading.rows.filter(isAside).slice(0, PREVIEW_ASIDES);
  const first = reading.rows.slice(0, PREVIEW_ROWS).filter((row) => !isAside(row));
  return [...asides, ...first].map((row) => {
    const { result } = row;
    if (result.kind !== 'empty' && known.has(row.key)) {
      const call = result.kind === 'continued' ? null : result.call;
      const seen = view(logId, row, 'known', 'Came with an earlier import', call);
      return { ...seen, callId: known.get(row.key) ?? null };
    }
    switch (result.kind) {
      case 'understood': {
        const reason = folded.get(row.key);
        const outcome = reason === undefined ? 'call' : 'folded';
        return view(logId, row, outcome, reason ?? '', result.call);
      }
      case 'aside':
        return view(logId, row, 'aside', result.reason, result.call);
      case 'continued': {
        const reason = `More of the message on line ${String(result.of)}`;
        return view(logId, row, 'folded', reason, null);
      }
      case 'empty':
        return view(logId, row, 'empty', result.reason, null);
    }
  });
}

function view(
  logId: string,
  row: Pick<RowReading, 'line' | 'cells'>,
  outcome: NightLogRowView['outcome'],
  reason: string,
  call: NightCall | null,
): NightLogRowView {
  return {
    id: null,
    logId,
    line: row.line,
    outcome,
    reason,
    cells: [...row.cells],
    name: call?.name ?? call?.business ?? '',
    phone: call?.phone ? formatPhone(call.phone.e164) : '',
    address: [call?.address?.text, call?.address?.unitNo].filter(Boolean).join(', '),
    units: call?.units.map(({ said, kind }) => said || kind).join(', ') ?? '',
    receivedAt: call?.receivedAt ?? null,
    callId: null,
  };
}

export function storedRowView(row: NightLogRowRecord): NightLogRowView {
  const call = row.understood === null ? null : (JSON.parse(row.understood) as NightCall);
  return {
    ...view(
      row.logId,
      { line: row.line, cells: JSON.parse(row.cells) as string[] },
      row.outcome,
      row.reason,
      call,
    ),
    id: row.id,
    callId: row.callId,
  };
}
