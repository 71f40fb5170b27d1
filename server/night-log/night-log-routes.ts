import { randomUUID } from 'node:crypto';
import type { ColumnGuess, NightLogDto, NightLogPreview } from '@shared/contract/night-logs';
import type { ColumnMap } from '@shared/domain/night-log/column-map';
import { Refusal } from '@shared/domain/errors';
import { CallRecord } from '../calls/call-record';
import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { findOpenStorm } from '../storms/storm-queries';
import { importLog, knownRows } from './import-log';
import { logToRead } from './log-context';
import { NightLogRecord, NightLogRowRecord } from './night-log-record';
import {
  columnGuesses,
  NO_COUNTS,
  nightLogDto,
  previewCounts,
  previewRows,
  storedRowView,
} from './night-log-rows';
import type { LogRead } from './read-log';

type Names =
  | 'listNightLogs'
  | 'uploadNightLog'
  | 'readNightLog'
  | 'previewNightLog'
  | 'importNightLog'
  | 'listAsides'
  | 'settleNightLogRow';

/** Night logs: sent, looked at, imported, and what they leave for a person. */
export function nightLogRoutes(context: Context): SomeHandlers<Names> {
  return {
    listNightLogs: async ({ params }) => {
      const logs = await NightLogRecord.findAll({
        where: { stormId: params.stormId },
        attributes: { exclude: ['bytes'] },
        order: [['uploadedAt', 'DESC']],
      });
      return { logs: await Promise.all(logs.map(nightLogDto)) };
    },

    uploadNightLog: async ({ params, query, body, person }): Promise<NightLogPreview> => {
      await findOpenStorm(params.stormId);
      const order = await logToRead(context, params.stormId, body, null);
      const read = await context.logReader.run(order);
      if (read.reading.counts.empty === read.reading.rows.length)
        throw new Refusal('log-not-readable', 'Nothing in the file can be a call.');
      const log = await runCommand(
        context,
        orderFrom('uploadNightLog', person, { commandId: randomUUID() }),
        async (job): Promise<NightLogDto> => {
          job.inStorm(params.stormId);
          const record = await NightLogRecord.create(
            {
              id: randomUUID(),
              stormId: params.stormId,
              fileName: query.fileName,
              bytes: Buffer.from(body),
              state: 'read',
              encoding: read.file.encoding,
              columns: JSON.stringify(columnGuesses(read)),
              rowCount: read.reading.rows.length,
              counts: NO_COUNTS,
              uploadedAt: job.at,
              userId: person.userId,
            },
            { transaction: job.tx },
          );
          job.note('night log', record.id, 'sent a night log');
          return nightLogDto(record);
        },
      );
      return preview(context, log, read);
    },

    readNightLog: async ({ params }) => nightLogDto(await findLog(params.logId)),

    previewNightLog: async ({ params, body }): Promise<NightLogPreview> => {
      const log = await findLog(params.logId);
      const columns = withRoles(log, body.columns);
      const read = await context.logReader.run(
        await logToRead(context, log.stormId, log.bytes, { columns }),
      );
      return preview(context, await nightLogDto(log), read);
    },

    importNightLog: async ({ params, body, person }) => {
      const reply = await runCommand(
        context,
        orderFrom('importNightLog', person, { ...body, ...params }),
        async (job): Promise<NightLogDto> => {
          const log = await NightLogRecord.findByPk(params.logId, {
            transaction: job.tx,
            lock: job.tx.LOCK.UPDATE,
          });
          if (!log) throw new Refusal('not-found', 'There is no such log.');
          await findOpenStorm(log.stormId, job.tx);
          if (log.state === 'importing')
            throw new Refusal('log-busy', 'The log is being imported already.');
          job.inStorm(log.stormId);
          await log.update(
            {
              state: 'importing',
              doneCount: 0,
              counts: NO_COUNTS,
              columns: JSON.stringify(withRoles(log, body.columns)),
            },
            { transaction: job.tx },
          );
          job.note('night log', log.id, 'began to import a night log');
          job.afterCommit(() => void importLog(context, log.id, person));
          return nightLogDto(log);
        },
      );
      return reply;
    },

    listAsides: async ({ params }) => {
      const rows = await NightLogRowRecord.findAll({
        where: { stormId: params.stormId, outcome: 'aside' },
        order: [
          ['logId', 'ASC'],
          ['line', 'ASC'],
        ],
        limit: 500,
      });
      return { rows: rows.map(storedRowView) };
    },

    settleNightLogRow: ({ params, body, person }) =>
      runCommand(
        context,
        orderFrom('settleNightLogRow', person, { ...body, ...params }),
        async (job) => {
          const row = await NightLogRowRecord.findByPk(params.rowId, {
            transaction: job.tx,
            lock: job.tx.LOCK.UPDATE,
          });
          if (!row) throw new Refusal('not-found', 'There is no such row.');
          if (row.outcome !== 'aside')
            throw new Refusal('already-used', 'Somebody has settled this row already.');
          if (body.callId !== null) {
            const call = await CallRecord.findByPk(body.callId, { transaction: job.tx });
            if (call?.stormId !== row.stormId)
              throw new Refusal('not-found', 'That call is not of this storm.');
          }
          row.set({
            outcome: 'settled',
            callId: body.callId,
            settledBy: person.userId,
            reason: (body.note || row.reason).slice(0, 300),
          });
          await row.save({ transaction: job.tx });
          job.inStorm(row.stormId);
          job.note(
            'night log row',
            row.id,
            body.callId ? 'made a call of a row' : 'dismissed a row',
          );
          return storedRowView(row);
        },
      ),
  };
}

async function preview(
  context: Context,
  log: NightLogDto,
  read: LogRead,
): Promise<NightLogPreview> {
  const keys = read.reading.rows.map(({ key }) => key);
  const known = await knownRows(context, log.stormId, keys);
  return {
    log: { ...log, columns: columnGuesses(read), counts: previewCounts(read, known) },
    rows: previewRows(log.id, read, known),
  };
}

async function findLog(id: string): Promise<NightLogRecord> {
  const log = await NightLogRecord.findByPk(id);
  if (!log) throw new Refusal('not-found', 'There is no such log.');
  return log;
}

/** The guessed columns with the roles that a person gave them. */
function withRoles(
  log: NightLogRecord,
  roles: readonly ColumnGuess['role'][],
): (ColumnGuess & ColumnMap['columns'][number])[] {
  return (JSON.parse(log.columns) as ColumnGuess[]).map((column, i) => {
    const role = roles[i] ?? column.role;
    return role === column.role
      ? column
      : { ...column, role, confidence: 1, why: 'as a person set it' };
  });
}
