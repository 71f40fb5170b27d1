import { createRequire } from 'node:module';
import type { Connection, ConnectionConfig } from 'mariadb';

const load = createRequire(__filename);
const mariadb = load('mariadb') as typeof import('mariadb');

type Query = (sql: unknown, values?: unknown) => Promise<unknown>;

/**
 * The connector as Sequelize 6 expects it.
 *
 * Sequelize 6 deletes `meta` from every raw result, which connectors since 3.1 make
 * non-configurable, so raw queries and down-migrations throw "Cannot delete property 'meta'".
 * A copy with a plain `meta` satisfies both. Goes away with Sequelize 7.
 */
export const mariadbModule = {
  ...mariadb,
  async createConnection(config: ConnectionConfig): Promise<Connection> {
    const connection = await mariadb.createConnection(config);
    const query = connection.query.bind(connection) as Query;
    connection.query = (async (sql: unknown, values?: unknown) =>
      withPlainMeta(await query(sql, values))) as Connection['query'];
    return connection;
  },
};

function withPlainMeta(result: unknown): unknown {
  if (!Array.isArray(result)) return result;
  const meta = (result as { meta?: unknown }).meta;
  const rows = [...(result as unknown[])];
  Object.defineProperty(rows, 'meta', {
    value: meta,
    configurable: true,
    writable: true,
    enumerable: false,
  });
  return rows;
}
