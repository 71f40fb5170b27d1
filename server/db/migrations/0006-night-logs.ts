import type { Run } from '../migrate';

// VARCHAR, since MariaDB will not index a virtual column over CHAR (its padding depends on sql_mode).
const ID = 'VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin';

export async function up(run: Run): Promise<void> {
  await run(`CREATE TABLE night_logs (
    id ${ID} PRIMARY KEY,
    storm_id ${ID} NOT NULL,
    file_name VARCHAR(200) NOT NULL,
    bytes LONGBLOB NOT NULL,
    state ENUM('read','importing','imported','failed') NOT NULL,
    encoding VARCHAR(20) NOT NULL,
    columns MEDIUMTEXT NOT NULL,
    row_count INT UNSIGNED NOT NULL,
    done_count INT UNSIGNED NOT NULL DEFAULT 0,
    counts JSON NOT NULL,
    trouble VARCHAR(300) NULL,
    uploaded_at DATETIME(3) NOT NULL,
    user_id ${ID} NOT NULL,
    KEY of_storm (storm_id, uploaded_at),
    FOREIGN KEY (storm_id) REFERENCES storms (id),
    FOREIGN KEY (user_id) REFERENCES users (id)
  )`);
  await run(`CREATE TABLE night_log_rows (
    id ${ID} PRIMARY KEY,
    log_id ${ID} NOT NULL,
    storm_id ${ID} NOT NULL,
    line INT UNSIGNED NOT NULL,
    -- From the row's own cells: the same row again, in whatever file, changes nothing.
    row_key VARCHAR(80) CHARACTER SET ascii COLLATE ascii_bin NOT NULL,
    cells MEDIUMTEXT NOT NULL,
    understood MEDIUMTEXT NULL,
    outcome ENUM('call','folded','aside','empty','known','settled') NOT NULL,
    reason VARCHAR(300) NOT NULL,
    call_id ${ID} NULL,
    settled_by ${ID} NULL,
    UNIQUE KEY once (storm_id, row_key),
    KEY of_log (log_id, line),
    KEY asides (storm_id, outcome),
    FOREIGN KEY (log_id) REFERENCES night_logs (id),
    FOREIGN KEY (storm_id) REFERENCES storms (id),
    FOREIGN KEY (call_id) REFERENCES calls (id)
  )`);
}

export async function down(run: Run): Promise<void> {
  await run('DROP TABLE night_log_rows');
  await run('DROP TABLE night_logs');
}
