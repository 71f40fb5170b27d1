import { ensureMariadb, SERVERS } from './mariadb.mjs';

/** How to reach the tests' database server: as the environment says, else the private one, started if need be. */
export async function testDatabase() {
  const { env } = process;
  if (!env.THAWLINE_TEST_DB_HOST) return ensureMariadb(SERVERS.tests);
  return {
    host: env.THAWLINE_TEST_DB_HOST,
    port: Number(env.THAWLINE_TEST_DB_PORT),
    user: env.THAWLINE_TEST_DB_USER,
    password: env.THAWLINE_TEST_DB_PASSWORD,
  };
}

/** Drops a database and makes it anew, empty. */
export async function recreateDatabase(connection, name) {
  // Imported here: this module is loaded before the packages are installed.
  const { createConnection } = await import('mariadb');
  const { host, port, user, password } = connection;
  const database = await createConnection({ host, port, user, password });
  try {
    await database.query(`DROP DATABASE IF EXISTS \`${name}\``);
    await database.query(`CREATE DATABASE \`${name}\``);
  } finally {
    await database.end();
  }
}
