import type { Run } from '../migrate';

// VARCHAR, since MariaDB will not index a virtual column over CHAR (its padding depends on sql_mode).
const ID = 'VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin';
const KEY = 'VARCHAR(160) CHARACTER SET ascii COLLATE ascii_bin';
const ADDRESS_KINDS = "'rooftop','interpolated','corner','street','place','pin','unlocated'";

export async function up(run: Run): Promise<void> {
  await run(`CREATE TABLE region_switches (
    id ${ID} PRIMARY KEY,
    from_key ${KEY} NULL,
    to_key ${KEY} NOT NULL,
    to_name VARCHAR(120) NOT NULL,
    state ENUM('locating','done') NOT NULL,
    -- The storm whose calls are located, up to the number that was the last at that moment.
    storm_id ${ID} NULL,
    total INT UNSIGNED NOT NULL DEFAULT 0,
    done INT UNSIGNED NOT NULL DEFAULT 0,
    located INT UNSIGNED NOT NULL DEFAULT 0,
    returned INT UNSIGNED NOT NULL DEFAULT 0,
    kept INT UNSIGNED NOT NULL DEFAULT 0,
    outside INT UNSIGNED NOT NULL DEFAULT 0,
    at DATETIME(3) NOT NULL,
    user_id ${ID} NULL,
    KEY by_time (at),
    FOREIGN KEY (storm_id) REFERENCES storms (id)
  )`);
  // One row: whatever server reads it works in that region.
  await run(`CREATE TABLE region_in_use (
    id TINYINT UNSIGNED PRIMARY KEY,
    region_key ${KEY} NOT NULL,
    switch_id ${ID} NULL,
    CONSTRAINT one_region CHECK (id = 1),
    FOREIGN KEY (switch_id) REFERENCES region_switches (id)
  )`);
  await run(`CREATE TABLE region_imports (
    id ${ID} PRIMARY KEY,
    name VARCHAR(80) NOT NULL,
    state ENUM('running','done','failed','cancelled') NOT NULL,
    step VARCHAR(40) NOT NULL DEFAULT '',
    share DOUBLE NOT NULL DEFAULT 0,
    trouble VARCHAR(600) NULL,
    region_key ${KEY} NULL,
    started_at DATETIME(3) NOT NULL,
    ended_at DATETIME(3) NULL,
    -- By the database's clock: an import that has said nothing for long runs no more.
    heard_at DATETIME(3) NOT NULL,
    user_id ${ID} NULL,
    is_running TINYINT AS (IF(state = 'running', 1, NULL)) VIRTUAL,
    UNIQUE KEY one_import (is_running),
    KEY by_time (started_at)
  )`);
  // Where a call stood in a region that is no longer in use, so that going back loses nothing.
  await run(`CREATE TABLE call_points (
    call_id ${ID} NOT NULL,
    region_key ${KEY} NOT NULL,
    address_text VARCHAR(160) NOT NULL,
    lon DOUBLE NULL,
    lat DOUBLE NULL,
    address_kind ENUM(${ADDRESS_KINDS}) NOT NULL,
    PRIMARY KEY (call_id, region_key),
    FOREIGN KEY (call_id) REFERENCES calls (id)
  )`);
  await run(`CREATE TABLE region_switch_calls (
    switch_id ${ID} NOT NULL,
    call_id ${ID} NOT NULL,
    outcome ENUM('kept','outside') NOT NULL,
    PRIMARY KEY (switch_id, call_id),
    FOREIGN KEY (switch_id) REFERENCES region_switches (id),
    FOREIGN KEY (call_id) REFERENCES calls (id)
  )`);
}

export async function down(run: Run): Promise<void> {
  for (const table of [
    'region_switch_calls',
    'call_points',
    'region_imports',
    'region_in_use',
    'region_switches',
  ])
    await run(`DROP TABLE ${table}`);
}
