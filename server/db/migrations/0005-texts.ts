import type { Run } from '../migrate';

// VARCHAR, since MariaDB will not index a virtual column over CHAR (its padding depends on sql_mode).
const ID = 'VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin';

export async function up(run: Run): Promise<void> {
  await run(`CREATE TABLE messages (
    id ${ID} PRIMARY KEY,
    storm_id ${ID} NULL,
    call_id ${ID} NULL,
    phone VARCHAR(16) NOT NULL,
    direction ENUM('out','in') NOT NULL,
    body VARCHAR(1600) NOT NULL,
    state ENUM('new','sending','sent','delivered','undelivered','failed','unknown','suppressed','received') NOT NULL,
    milestone VARCHAR(40) NULL,
    -- One text per milestone of a call, however often the milestone is reached again.
    dedupe_key VARCHAR(120) CHARACTER SET ascii COLLATE ascii_bin NULL,
    segments TINYINT UNSIGNED NOT NULL DEFAULT 0,
    at DATETIME(3) NOT NULL,
    due_at DATETIME(3) NOT NULL,
    attempts TINYINT UNSIGNED NOT NULL DEFAULT 0,
    -- Whoever sends holds this token until the time beside it, by the database's own clock.
    claim_token ${ID} NULL,
    claim_until DATETIME(3) NULL,
    provider_sid VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NULL,
    trouble VARCHAR(300) NULL,
    read_at DATETIME(3) NULL,
    version INT UNSIGNED NOT NULL DEFAULT 0,
    UNIQUE KEY told_once (dedupe_key),
    UNIQUE KEY one_of_provider (provider_sid),
    KEY outbox (state, due_at),
    KEY of_call (call_id, at),
    KEY of_storm (storm_id, at),
    KEY of_phone (phone, at),
    FOREIGN KEY (storm_id) REFERENCES storms (id),
    FOREIGN KEY (call_id) REFERENCES calls (id)
  )`);
  await run(`CREATE TABLE message_callbacks (
    provider_sid VARCHAR(40) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    status VARCHAR(20) NOT NULL,
    message_id ${ID} NULL,
    error_code VARCHAR(12) NULL,
    at DATETIME(3) NOT NULL,
    PRIMARY KEY (provider_sid, status)
  )`);
  await run(`CREATE TABLE opt_outs (
    phone VARCHAR(16) PRIMARY KEY,
    at DATETIME(3) NOT NULL
  )`);
}

export async function down(run: Run): Promise<void> {
  for (const table of ['opt_outs', 'message_callbacks', 'messages'])
    await run(`DROP TABLE ${table}`);
}
