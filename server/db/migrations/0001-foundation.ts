import type { Run } from '../migrate';

// VARCHAR, since MariaDB will not index a virtual column over CHAR (its padding depends on sql_mode).
const ID = 'VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin';

export async function up(run: Run): Promise<void> {
  await run(`CREATE TABLE storms (
    id ${ID} PRIMARY KEY,
    name VARCHAR(80) NOT NULL,
    state ENUM('open','closed') NOT NULL DEFAULT 'open',
    opened_at DATETIME(3) NOT NULL,
    closed_at DATETIME(3) NULL,
    calls_taken INT UNSIGNED NOT NULL DEFAULT 0,
    plan_epoch INT UNSIGNED NOT NULL DEFAULT 0,
    version INT UNSIGNED NOT NULL DEFAULT 0,
    -- At most one storm is open: two would have two boards fight for the same vans.
    the_open_one TINYINT AS (IF(state = 'open', 1, NULL)) VIRTUAL,
    UNIQUE KEY one_open_storm (the_open_one),
    CHECK (closed_at IS NULL OR closed_at >= opened_at)
  )`);

  // A counter row per stream, bumped inside the change's own transaction, numbers changes in the
  // order of their commits. AUTO_INCREMENT hands numbers out before commit, and a reader that
  // tails it misses what commits late.
  await run(`CREATE TABLE feeds (
    storm_id ${ID} NOT NULL,
    stream VARCHAR(60) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    n BIGINT UNSIGNED NOT NULL DEFAULT 0,
    PRIMARY KEY (storm_id, stream),
    FOREIGN KEY (storm_id) REFERENCES storms (id)
  )`);
  await run(`CREATE TABLE feed_changes (
    storm_id ${ID} NOT NULL,
    stream VARCHAR(60) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    n BIGINT UNSIGNED NOT NULL,
    at DATETIME(3) NOT NULL,
    -- COMPRESS()ed JSON would save room, but a person may want to read it.
    \`change\` MEDIUMTEXT NOT NULL,
    PRIMARY KEY (storm_id, stream, n),
    FOREIGN KEY (storm_id, stream) REFERENCES feeds (storm_id, stream)
  )`);

  await run(`CREATE TABLE applied_commands (
    id ${ID} PRIMARY KEY,
    user_id ${ID} NULL,
    type VARCHAR(40) NOT NULL,
    fingerprint CHAR(64) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    reply MEDIUMTEXT NULL,
    at DATETIME(3) NOT NULL,
    KEY by_age (at)
  )`);

  await run(`CREATE TABLE audit_chains (
    chain VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin PRIMARY KEY,
    n BIGINT UNSIGNED NOT NULL DEFAULT 0,
    hash CHAR(64) CHARACTER SET ascii COLLATE ascii_bin NOT NULL
  )`);
  await run(`CREATE TABLE audit_entries (
    chain VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    n BIGINT UNSIGNED NOT NULL,
    at DATETIME(3) NOT NULL,
    user_id ${ID} NULL,
    actor VARCHAR(80) NOT NULL,
    command VARCHAR(40) NOT NULL,
    command_id ${ID} NOT NULL,
    entity VARCHAR(30) NOT NULL,
    entity_id VARCHAR(60) NOT NULL,
    summary VARCHAR(300) NOT NULL,
    hash CHAR(64) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    PRIMARY KEY (chain, n),
    KEY of_entity (entity_id, at),
    FOREIGN KEY (chain) REFERENCES audit_chains (chain)
  )`);

  await run(`CREATE TABLE settings (
    id TINYINT UNSIGNED PRIMARY KEY,
    body TEXT NOT NULL,
    version INT UNSIGNED NOT NULL DEFAULT 0,
    CHECK (id = 1)
  )`);
}

export async function down(run: Run): Promise<void> {
  for (const table of [
    'settings',
    'audit_entries',
    'audit_chains',
    'applied_commands',
    'feed_changes',
    'feeds',
    'storms',
  ])
    await run(`DROP TABLE ${table}`);
}
