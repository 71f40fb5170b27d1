/**
 * The private database server's settings.
 *
 * Durable: a commit is on the disk before it is acknowledged; a killed server loses nothing that it
 * acknowledged. `innodb-snapshot-isolation` refuses the write of a transaction that decided on a stale
 * row (error 1020) where plain REPEATABLE READ would silently lose the other's update.
 */
const DURABLE = ['innodb-flush-log-at-trx-commit = 1', 'innodb-doublewrite = ON'];

/** For tests: same rules, no waiting for the disk. What is in it is thrown away anyway. */
const FAST = [
  'innodb-flush-log-at-trx-commit = 0',
  'innodb-doublewrite = OFF',
  'innodb-flush-method = nosync',
];

export function settingsFile(place, { port, user, fast }) {
  return `[mariadbd]
${user ? `user = ${user}\n` : ''}datadir = ${place.rows}
socket = ${place.socket}
pid-file = ${place.pid}
log-error = ${place.log}
init-file = ${place.accounts}
port = ${port}
bind-address = 127.0.0.1
skip-name-resolve = ON
local-infile = OFF
symbolic-links = OFF

character-set-server = utf8mb4
collation-server = utf8mb4_unicode_ci
default-time-zone = +00:00
sql-mode = STRICT_ALL_TABLES,NO_ZERO_DATE,NO_ZERO_IN_DATE,ERROR_FOR_DIVISION_BY_ZERO,NO_ENGINE_SUBSTITUTION
transaction-isolation = REPEATABLE-READ
innodb-snapshot-isolation = ON
innodb-lock-wait-timeout = 5
lock-wait-timeout = 30
innodb-buffer-pool-size = 256M
max-connections = 200
max-allowed-packet = 64M
performance-schema = OFF
${(fast ? FAST : DURABLE).join('\n')}
`;
}

/**
 * The SQL that the server runs before it takes its first connection, at every start: accounts with
 * generated passwords on loopback only, and the product's database.
 *
 * @param databases the product's own database, or the prefix of the tests' databases
 */
export function accountsFile({ databasePassword, databaseRootPassword }, { database, testPrefix }) {
  const lines = [
    `ALTER USER 'root'@'localhost' IDENTIFIED BY '${databaseRootPassword}';`,
    `DELETE FROM mysql.global_priv WHERE User = '' OR (User = 'root' AND Host <> 'localhost');`,
    'FLUSH PRIVILEGES;',
  ];
  for (const host of ['127.0.0.1', 'localhost']) {
    const account = `'thawline'@'${host}'`;
    lines.push(
      `CREATE USER IF NOT EXISTS ${account} IDENTIFIED BY '${databasePassword}';`,
      `ALTER USER ${account} IDENTIFIED BY '${databasePassword}';`,
    );
    if (database) lines.push(`GRANT ALL ON \`${database}\`.* TO ${account};`);
    if (testPrefix) {
      // PROCESS: a race test waits until it sees two transactions wait for one lock.
      lines.push(
        `GRANT ALL ON \`${testPrefix.replace('_', '\\_')}%\`.* TO ${account};`,
        `GRANT PROCESS ON *.* TO ${account};`,
      );
    }
  }
  if (database) lines.push(`CREATE DATABASE IF NOT EXISTS \`${database}\`;`);
  // The server reads one statement a line.
  return `${lines.join('\n')}\n`;
}
