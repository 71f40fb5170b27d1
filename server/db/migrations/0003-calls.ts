import type { Run } from '../migrate';

// VARCHAR, since MariaDB will not index a virtual column over CHAR (its padding depends on sql_mode).
const ID = 'VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin';
const STATES =
  "'new','checking','waiting','planned','offered','accepted','travelling','on-site','parts-on-order','running-again','restored','not-repairable','no-access','referred','cancelled','duplicate'";
const SETTLED = "'running-again','restored','not-repairable','referred','cancelled','duplicate'";
const ADDRESS_KINDS = "'rooftop','interpolated','corner','street','place','pin','unlocated'";

export async function up(run: Run): Promise<void> {
  await run(`CREATE TABLE areas (
    id ${ID} PRIMARY KEY,
    storm_id ${ID} NOT NULL,
    name VARCHAR(80) NOT NULL,
    ring MEDIUMTEXT NOT NULL,
    out_at DATETIME(3) NOT NULL,
    back_at DATETIME(3) NULL,
    version INT UNSIGNED NOT NULL DEFAULT 0,
    FOREIGN KEY (storm_id) REFERENCES storms (id),
    CHECK (back_at IS NULL OR back_at >= out_at)
  )`);

  await run(`CREATE TABLE households (
    id ${ID} PRIMARY KEY,
    phone VARCHAR(16) NOT NULL,
    name VARCHAR(120) NOT NULL,
    address_text VARCHAR(160) NOT NULL,
    unit_no VARCHAR(24) NOT NULL,
    lon DOUBLE NULL,
    lat DOUBLE NULL,
    address_kind ENUM(${ADDRESS_KINDS}) NOT NULL,
    language ENUM('en','es') NOT NULL DEFAULT 'en',
    may_text BOOLEAN NOT NULL DEFAULT FALSE,
    UNIQUE KEY one_household (phone)
  )`);

  await run(`CREATE TABLE calls (
    id ${ID} PRIMARY KEY,
    storm_id ${ID} NOT NULL,
    number INT UNSIGNED NOT NULL,
    household_id ${ID} NULL,
    state ENUM(${STATES}) NOT NULL,
    received_at DATETIME(3) NOT NULL,
    settled_at DATETIME(3) NULL,
    name VARCHAR(120) NOT NULL,
    phone VARCHAR(16) NULL,
    address_text VARCHAR(160) NOT NULL,
    unit_no VARCHAR(24) NOT NULL,
    lon DOUBLE NULL,
    lat DOUBLE NULL,
    address_kind ENUM(${ADDRESS_KINDS}) NOT NULL,
    area_id ${ID} NULL,
    power_out_at DATETIME(3) NOT NULL,
    power_back_at DATETIME(3) NULL,
    times_from ENUM('area','caller') NOT NULL,
    restored_at DATETIME(3) NULL,
    claim_user_id ${ID} NULL,
    claim_until DATETIME(3) NULL,
    language ENUM('en','es') NOT NULL DEFAULT 'en',
    may_text BOOLEAN NOT NULL DEFAULT FALSE,
    danger BOOLEAN NOT NULL DEFAULT FALSE,
    source ENUM('phone','night-log','customer') NOT NULL,
    phone_check JSON NOT NULL,
    skills JSON NOT NULL,
    parts JSON NOT NULL,
    causes JSON NOT NULL,
    duplicate_of_id ${ID} NULL,
    version INT UNSIGNED NOT NULL DEFAULT 0,
    -- The same household is one call: the database itself refuses a second open one.
    open_household ${ID} AS (IF(state IN (${SETTLED}), NULL, household_id)) VIRTUAL,
    UNIQUE KEY one_open_call (storm_id, open_household),
    UNIQUE KEY call_number (storm_id, number),
    KEY on_board (storm_id, state),
    KEY in_area (area_id),
    KEY of_household (household_id),
    FOREIGN KEY (storm_id) REFERENCES storms (id),
    FOREIGN KEY (household_id) REFERENCES households (id),
    FOREIGN KEY (area_id) REFERENCES areas (id) ON DELETE SET NULL,
    FOREIGN KEY (claim_user_id) REFERENCES users (id),
    FOREIGN KEY (duplicate_of_id) REFERENCES calls (id),
    CHECK (power_back_at IS NULL OR power_back_at >= power_out_at),
    CHECK ((lon IS NULL) = (lat IS NULL)),
    CHECK ((settled_at IS NULL) = (state NOT IN (${SETTLED})))
  )`);

  await run(`CREATE TABLE cold_units (
    id ${ID} PRIMARY KEY,
    call_id ${ID} NOT NULL,
    place_no TINYINT UNSIGNED NOT NULL,
    kind ENUM('refrigerator','fridge-freezer','upright-freezer','chest-freezer','walk-in','medicine-fridge') NOT NULL,
    compressor_start ENUM('relay','inverter','unknown') NOT NULL,
    age_years TINYINT UNSIGNED NULL,
    cubic_feet DOUBLE NULL,
    place VARCHAR(60) NOT NULL,
    KEY of_call (call_id, place_no),
    FOREIGN KEY (call_id) REFERENCES calls (id)
  )`);
  // The clocks stand beside the facts that they were worked out from, so that lists and sums are
  // plain SQL; both are written by the same command.
  await run(`CREATE TABLE compartments (
    unit_id ${ID} NOT NULL,
    place_no TINYINT UNSIGNED NOT NULL,
    kind ENUM('fresh-food','freezer','medicine','commercial-stock') NOT NULL,
    facts JSON NOT NULL,
    value_cents INT UNSIGNED NOT NULL,
    at_risk_at DATETIME(3) NOT NULL,
    save_by_at DATETIME(3) NULL,
    reasons JSON NOT NULL,
    PRIMARY KEY (unit_id, place_no),
    FOREIGN KEY (unit_id) REFERENCES cold_units (id),
    CHECK (save_by_at IS NULL OR at_risk_at <= save_by_at)
  )`);

  await run(`CREATE TABLE call_changes (
    call_id ${ID} NOT NULL,
    n INT UNSIGNED NOT NULL,
    at DATETIME(3) NOT NULL,
    from_state ENUM(${STATES}) NULL,
    to_state ENUM(${STATES}) NOT NULL,
    user_id ${ID} NULL,
    actor VARCHAR(80) NOT NULL,
    reason VARCHAR(300) NOT NULL,
    PRIMARY KEY (call_id, n),
    KEY by_time (at),
    FOREIGN KEY (call_id) REFERENCES calls (id),
    FOREIGN KEY (user_id) REFERENCES users (id)
  )`);
  await run(`CREATE TABLE remarks (
    id BIGINT UNSIGNED AUTO_INCREMENT PRIMARY KEY,
    call_id ${ID} NOT NULL,
    at DATETIME(3) NOT NULL,
    user_id ${ID} NULL,
    actor VARCHAR(80) NOT NULL,
    text TEXT NOT NULL,
    KEY of_call (call_id, at),
    FOREIGN KEY (call_id) REFERENCES calls (id)
  )`);
}

export async function down(run: Run): Promise<void> {
  for (const table of [
    'remarks',
    'call_changes',
    'compartments',
    'cold_units',
    'calls',
    'households',
    'areas',
  ])
    await run(`DROP TABLE ${table}`);
}
