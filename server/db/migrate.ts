import { QueryTypes, type Sequelize } from 'sequelize';
import { Umzug } from 'umzug';
import { select } from './sql';
import * as foundation from './migrations/0001-foundation';
import * as people from './migrations/0002-people';
import * as calls from './migrations/0003-calls';
import * as routes from './migrations/0004-routes';
import * as texts from './migrations/0005-texts';
import * as nightLogs from './migrations/0006-night-logs';
import * as locksInOrder from './migrations/0007-locks-in-order';
import * as stormRoads from './migrations/0008-storm-roads';
import * as regions from './migrations/0009-regions';
import * as areaShapes from './migrations/0010-area-shapes';
import * as whatIsLost from './migrations/0011-what-is-lost';
import * as rollingRoutes from './migrations/0012-rolling-routes';

/** Runs one statement of a migration; `?` stands for a value. */
export type Run = (statement: string, values?: readonly unknown[]) => Promise<void>;
/** Reads rows, for a migration that works something out from them. */
export type Read = <Row extends object>(
  query: string,
  values?: readonly unknown[],
) => Promise<Row[]>;
export interface Migration {
  up(run: Run, read: Read): Promise<void>;
  down(run: Run): Promise<void>;
}

/** In order. A migration that has been released is never edited; a new one follows it. */
const MIGRATIONS: Readonly<Record<string, Migration>> = {
  '0001-foundation': foundation,
  '0002-people': people,
  '0003-calls': calls,
  '0004-routes': routes,
  '0005-texts': texts,
  '0006-night-logs': nightLogs,
  '0007-locks-in-order': locksInOrder,
  '0008-storm-roads': stormRoads,
  '0009-regions': regions,
  '0010-area-shapes': areaShapes,
  '0011-what-is-lost': whatIsLost,
  '0012-rolling-routes': rollingRoutes,
};

/** Brings the schema up to date; safe when two processes start at once. @returns names newly applied */
export function migrate(sequelize: Sequelize): Promise<string[]> {
  return alone(sequelize, async () =>
    (await migrator(sequelize).up()).map((applied) => applied.name),
  );
}

/** Takes every migration back. Only tests and a person at the keyboard want this. */
export function unmigrate(sequelize: Sequelize): Promise<string[]> {
  return alone(sequelize, async () =>
    (await migrator(sequelize).down({ to: 0 })).map((taken) => taken.name),
  );
}

function migrator(sequelize: Sequelize): Umzug<{ run: Run; read: Read }> {
  const run: Run = async (statement, values = []) => {
    await sequelize.query(statement, {
      type: QueryTypes.RAW,
      ...(values.length > 0 ? { replacements: [...values] } : {}),
    });
  };
  const read: Read = (query, values = []) => select(sequelize, query, [...values]);
  return new Umzug<{ run: Run; read: Read }>({
    migrations: Object.entries(MIGRATIONS).map(([name, { up, down }]) => ({
      name,
      up: ({ context }) => up(context.run, context.read),
      down: ({ context }) => down(context.run),
    })),
    // Wrapped, since a bare function would be called as a factory.
    context: { run, read },
    storage: {
      async executed() {
        await run(
          'CREATE TABLE IF NOT EXISTS migrations (name VARCHAR(80) PRIMARY KEY, applied_at DATETIME(3) NOT NULL DEFAULT UTC_TIMESTAMP(3))',
        );
        const rows = await select<{ name: string }>(
          sequelize,
          'SELECT name FROM migrations ORDER BY name',
        );
        return rows.map((row) => row.name);
      },
      async logMigration({ name }) {
        await sequelize.query('INSERT INTO migrations (name) VALUES (?)', {
          type: QueryTypes.INSERT,
          replacements: [name],
        });
      },
      async unlogMigration({ name }) {
        await sequelize.query('DELETE FROM migrations WHERE name = ?', {
          type: QueryTypes.DELETE,
          replacements: [name],
        });
      },
    },
    logger: undefined,
  });
}

/**
 * One process migrates, the others wait. DDL commits by itself in MariaDB, so a transaction could
 * not keep two apart; a named lock, held by a connection of its own, can.
 */
async function alone<T>(sequelize: Sequelize, work: () => Promise<T>): Promise<T> {
  return sequelize.transaction(async (holder) => {
    const name = `thawline-migrate-${sequelize.config.database}`.slice(0, 64);
    await select(sequelize, 'SELECT GET_LOCK(?, 120) AS held', [name], holder);
    try {
      return await work();
    } finally {
      await select(sequelize, 'SELECT RELEASE_LOCK(?) AS freed', [name], holder);
    }
  });
}
