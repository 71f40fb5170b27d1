import { connect } from '../../server/db/connect';
import { migrate } from '../../server/db/migrate';
import { change, select } from '../../server/db/sql';
import { Sequelize, QueryTypes } from 'sequelize';

/** Where the test server is; `npm test` sets these, and a person can by the set-up script. */
export function testDatabase(suffix = ''): {
  host: string;
  port: number;
  user: string;
  password: string;
  name: string;
} {
  const { THAWLINE_TEST_DB_HOST, THAWLINE_TEST_DB_PORT, THAWLINE_TEST_DB_USER } = process.env;
  if (!THAWLINE_TEST_DB_PORT)
    throw new Error('These tests need a database: run them by `npm test`.');
  const prefix = process.env['THAWLINE_TEST_DB_PREFIX'] ?? 'thawline_test';
  return {
    host: THAWLINE_TEST_DB_HOST ?? '127.0.0.1',
    port: Number(THAWLINE_TEST_DB_PORT),
    user: THAWLINE_TEST_DB_USER ?? 'thawline_test',
    password: process.env['THAWLINE_TEST_DB_PASSWORD'] ?? '',
    name: `${prefix}${suffix}_${process.env['JEST_WORKER_ID'] ?? '1'}`,
  };
}

/** A migrated, empty database of this worker's own. */
export async function freshDatabase(suffix = ''): Promise<Sequelize> {
  const database = testDatabase(suffix);
  const root = new Sequelize({
    dialect: 'mariadb',
    host: database.host,
    port: database.port,
    username: database.user,
    password: database.password,
    logging: false,
  });
  await root.query(`CREATE DATABASE IF NOT EXISTS \`${database.name}\``, {
    type: QueryTypes.INSERT,
  });
  await root.close();
  const sequelize = connect(database);
  try {
    await migrate(sequelize);
    await emptyAll(sequelize);
  } catch (error) {
    // An open pool would keep the test run from ending.
    await sequelize.close();
    throw error;
  }
  return sequelize;
}

/** Empties every table but the list of migrations; DELETE, for TRUNCATE is slower on small ones. */
export async function emptyAll(sequelize: Sequelize): Promise<void> {
  const tables = await select<{ name: string }>(
    sequelize,
    `SELECT table_name AS name FROM information_schema.tables
     WHERE table_schema = DATABASE() AND table_type = 'BASE TABLE' AND table_name <> 'migrations'`,
  );
  await sequelize.transaction(async (tx) => {
    await change(sequelize, 'SET FOREIGN_KEY_CHECKS = 0', [], tx);
    for (const { name } of tables) await change(sequelize, `DELETE FROM \`${name}\``, [], tx);
    await change(sequelize, 'SET FOREIGN_KEY_CHECKS = 1', [], tx);
  });
}
