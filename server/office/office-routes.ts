import type { Settings } from '@shared/contract/office';
import { Refusal } from '@shared/domain/errors';
import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { insert, select } from '../db/sql';
import type { SomeHandlers } from '../http/bind-routes';
import { drainOf } from './drain';
import { drainCsv } from './drain-csv';
import { readSettings } from './settings';

type Names = 'drain' | 'settings' | 'changeSettings' | 'audit';

const DEFAULT_BUCKET_MINUTES = 30;
const AUDIT_PAGE = 100;

/** What the manager reads and sets. */
export function officeRoutes(context: Context): SomeHandlers<Names> {
  return {
    drain: async ({ params, query, http: { response } }) => {
      const drain = await drainOf(
        context,
        params.stormId,
        query.bucketMinutes ?? DEFAULT_BUCKET_MINUTES,
      );
      if (query.format !== 'csv') return drain;
      response
        .type('text/csv; charset=utf-8')
        .attachment('backlog-drain.csv')
        // The mark tells spreadsheets that this is UTF-8.
        .send(`\uFEFF${drainCsv(drain, context.region.dto.timeZone)}`);
      return undefined;
    },

    settings: () => readSettings(context.sequelize),

    changeSettings: ({ body, person }) =>
      runCommand(
        context,
        orderFrom('changeSettings', person, body),
        async (job): Promise<Settings> => {
          const { commandId: _id, version, ...changes } = body;
          // Everybody who changes settings waits for one row; the first change makes it.
          await insert(
            job.sequelize,
            "INSERT IGNORE INTO settings (id, body, version) VALUES (1, '{}', 0)",
            [],
            job.tx,
          );
          await select(
            job.sequelize,
            'SELECT id FROM settings WHERE id = 1 FOR UPDATE',
            [],
            job.tx,
          );
          const before = await readSettings(job.sequelize, job.tx);
          if (before.version !== version)
            throw new Refusal('stale-version', 'The settings have changed meanwhile.', before);
          const { version: _before, ...next } = { ...before, ...defined(changes) };
          await insert(
            job.sequelize,
            'REPLACE INTO settings (id, body, version) VALUES (1, ?, ?)',
            [JSON.stringify(next), version + 1],
            job.tx,
          );
          job.touched.settings = true;
          job.note('settings', '1', `changed ${Object.keys(defined(changes)).join(', ')}`);
          return { ...next, version: version + 1 };
        },
      ),

    audit: async ({ params, query }) => {
      const rows = await select<{
        n: number;
        at: Date;
        actor: string;
        command: string;
        entity: string;
        entity_id: string;
        summary: string;
      }>(
        context.sequelize,
        `SELECT n, at, actor, command, entity, entity_id, summary FROM audit_entries
          WHERE chain = ? AND (? IS NULL OR entity_id = ?) AND (? IS NULL OR n < ?)
          ORDER BY n DESC LIMIT ?`,
        [
          params.stormId,
          query.entityId ?? null,
          query.entityId ?? null,
          query.before ?? null,
          query.before ?? null,
          AUDIT_PAGE,
        ],
      );
      return {
        entries: rows.map((row) => ({
          n: Number(row.n),
          at: row.at.getTime(),
          by: row.actor,
          command: row.command,
          entity: row.entity,
          entityId: row.entity_id,
          summary: row.summary,
        })),
      };
    },
  };
}

/** Leaves out what was not sent, so that it does not wipe what stands. */
function defined<T extends object>(changes: T): { [K in keyof T]?: Exclude<T[K], undefined> } {
  return Object.fromEntries(Object.entries(changes).filter(([, value]) => value !== undefined)) as {
    [K in keyof T]?: Exclude<T[K], undefined>;
  };
}
