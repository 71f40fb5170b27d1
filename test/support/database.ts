import { connect } from '../../server/db/connect';
import { migrate } from '../../server/db/migrate';
import { change, select } from '../../server/db/sql';
import { Sequelize, QueryTypes } from 'sequelize';

/** Where the test server is; `npm test` sets these, and a person can by the set-up script. */
export function testDatabase(): {
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
    name: `${prefix}_${process.env['JEST_WORKER_ID'] ?? '1'}`,
  };
}

/** The migrated, empty database that the specs of this worker use one after the other. */
export async function freshDatabase(): Promise<Sequelize> {
  const database = testDatabase();
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

/**
 * Empties every table but the list of migrations, in one round trip: it is done before each test, and
 * one for each table was a good part of what the tests ask. DELETE, for TRUNCATE is slower on small ones.
 */
export async function emptyAll(sequelize: Sequelize): Promise<void> {
  const tables = await select<{ name: string }>(
    sequelize,
    `SELECT table_name AS name FROM information_schema.tables
     WHERE table_schema = DATABASE() AND table_type = 'BASE TABLE' AND table_name <> 'migrations'`,
  );
  await change(
    sequelize,
    `BEGIN NOT ATOMIC
       DECLARE EXIT HANDLER FOR SQLEXCEPTION
         BEGIN ROLLBACK; SET FOREIGN_KEY_CHECKS = 1; RESIGNAL; END;
       SET FOREIGN_KEY_CHECKS = 0;
       START TRANSACTION;
       ${tables.map(({ name }) => `DELETE FROM \`${name}\`;`).join(' ')}
       COMMIT;
       SET FOREIGN_KEY_CHECKS = 1;
     END`,
    [],
  );
}
