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

/** What would become of the first rows, and of those that need a person. */
export function previewRows({ reading }: LogRead): NightLogRowView[] {
  const folded = new Map<string, string>();
  for (const { rows } of reading.households)
    for (const { key, reason } of rows.slice(1))
      folded.set(key, `With line ${String(rows[0]?.line)}: ${reason ?? ''}`);
  const isAside = (row: RowReading): boolean => row.result.kind === 'aside';
  const asides = reading.rows.filter(isAside).slice(0, PREVIEW_ASIDES);
  const first = reading.rows.slice(0, PREVIEW_ROWS).filter((row) => !isAside(row));
  return [...asides, ...first].map((row) => {
    const { result } = row;
    switch (result.kind) {
      case 'understood': {
        const reason = folded.get(row.key);
        return view(row, reason === undefined ? 'call' : 'folded', reason ?? '', result.call);
      }
      case 'aside':
        return view(row, 'aside', result.reason, result.call);
      case 'continued':
        return view(row, 'folded', `More of the message on line ${String(result.of)}`, null);
      case 'empty':
        return view(row, 'empty', result.reason, null);
    }
  });
}

function view(
  row: Pick<RowReading, 'line' | 'cells'>,
  outcome: NightLogRowView['outcome'],
  reason: string,
  call: NightCall | null,
): NightLogRowView {
  return {
    id: null,
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
      { line: row.line, cells: JSON.parse(row.cells) as string[] },
      row.outcome,
      row.reason,
      call,
    ),
    id: row.id,
    callId: row.callId,
  };
}
