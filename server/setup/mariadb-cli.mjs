/**
 * `node server/setup/mariadb-cli.mjs [--test] [--stop]`: makes sure that the private database server
 * runs and prints how to reach it as shell lines, for `eval "$(…)"`; with --stop it stops the server.
 */
import { ensureMariadb, SERVERS, stopMariadb } from './mariadb.mjs';
import { runMain } from './problem.mjs';

await runMain(async () => {
  const forTests = process.argv.includes('--test');
  const server = forTests ? SERVERS.tests : SERVERS.product;
  if (process.argv.includes('--stop')) {
    const stopped = await stopMariadb(server);
    process.stderr.write(stopped ? 'MariaDB stopped\n' : 'MariaDB was not running\n');
    return;
  }
  const { host, port, user, password } = await ensureMariadb(server, (text) =>
    process.stderr.write(`${text}\n`),
  );
  const prefix = forTests ? 'THAWLINE_TEST_DB' : 'THAWLINE_DB';
  for (const [name, value] of Object.entries({
    HOST: host,
    PORT: port,
    USER: user,
    PASSWORD: password,
  })) {
    process.stdout.write(`export ${prefix}_${name}=${value}\n`);
  }
});
