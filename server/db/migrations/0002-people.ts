import type { Run } from '../migrate';

// VARCHAR, since MariaDB will not index a virtual column over CHAR (its padding depends on sql_mode).
const ID = 'VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin';

export async function up(run: Run): Promise<void> {
  await run(`CREATE TABLE technicians (
    id ${ID} PRIMARY KEY,
    name VARCHAR(80) NOT NULL,
    phone VARCHAR(16) NOT NULL,
    skills JSON NOT NULL,
    van JSON NOT NULL,
    start_lon DOUBLE NOT NULL,
    start_lat DOUBLE NOT NULL,
    position_lon DOUBLE NULL,
    position_lat DOUBLE NULL,
    position_at DATETIME(3) NULL,
    position_accuracy_meters DOUBLE NULL,
    active BOOLEAN NOT NULL DEFAULT TRUE,
    version INT UNSIGNED NOT NULL DEFAULT 0
  )`);
  await run(`CREATE TABLE shifts (
    id ${ID} PRIMARY KEY,
    technician_id ${ID} NOT NULL,
    starts_at DATETIME(3) NOT NULL,
    ends_at DATETIME(3) NOT NULL,
    PERIOD FOR worked (starts_at, ends_at),
    UNIQUE KEY no_overlap (technician_id, worked WITHOUT OVERLAPS),
    FOREIGN KEY (technician_id) REFERENCES technicians (id)
  )`);
  await run(`CREATE TABLE users (
    id ${ID} PRIMARY KEY,
    name VARCHAR(80) NOT NULL,
    sign_in_name VARCHAR(120) NOT NULL,
    role ENUM('dispatcher','technician','manager','owner') NOT NULL,
    technician_id ${ID} NULL,
    password_hash VARCHAR(200) NOT NULL,
    must_change_password BOOLEAN NOT NULL DEFAULT FALSE,
    disabled BOOLEAN NOT NULL DEFAULT FALSE,
    -- Raised at sign-out everywhere, a new password, another role: older sessions are void at once.
    session_epoch INT UNSIGNED NOT NULL DEFAULT 0,
    version INT UNSIGNED NOT NULL DEFAULT 0,
    UNIQUE KEY one_account (sign_in_name),
    UNIQUE KEY one_account_per_technician (technician_id),
    FOREIGN KEY (technician_id) REFERENCES technicians (id),
    CHECK (technician_id IS NULL OR role = 'technician')
  )`);
  await run(`CREATE TABLE sign_in_attempts (
    who VARCHAR(140) PRIMARY KEY,
    failures INT UNSIGNED NOT NULL,
    last_at DATETIME(3) NOT NULL,
    blocked_until DATETIME(3) NULL
  )`);
  await run(`CREATE TABLE sessions (
    sid VARCHAR(128) CHARACTER SET ascii COLLATE ascii_bin PRIMARY KEY,
    expires DATETIME(3) NOT NULL,
    data TEXT NOT NULL,
    created_at DATETIME(3) NOT NULL,
    updated_at DATETIME(3) NOT NULL,
    KEY by_expiry (expires)
  )`);
}

export async function down(run: Run): Promise<void> {
  for (const table of ['sessions', 'sign_in_attempts', 'users', 'shifts', 'technicians'])
    await run(`DROP TABLE ${table}`);
}
