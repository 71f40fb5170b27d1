import type { Run } from '../migrate';

// VARCHAR, since MariaDB will not index a virtual column over CHAR (its padding depends on sql_mode).
const ID = 'VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin';

export async function up(run: Run): Promise<void> {
  await run(`CREATE TABLE plans (
    id ${ID} PRIMARY KEY,
    storm_id ${ID} NOT NULL,
    state ENUM('proposed','published','discarded','overtaken') NOT NULL,
    proposed_at DATETIME(3) NOT NULL,
    proposed_by VARCHAR(80) NOT NULL,
    body MEDIUMTEXT NOT NULL,
    -- The plan of a storm that it was made from; publishing moves the storm on by one, so a
    -- planner that slept through another publication cannot overwrite it.
    base_epoch INT UNSIGNED NOT NULL,
    version INT UNSIGNED NOT NULL DEFAULT 0,
    KEY of_storm (storm_id, proposed_at),
    FOREIGN KEY (storm_id) REFERENCES storms (id)
  )`);
  await run(`CREATE TABLE stops (
    id ${ID} PRIMARY KEY,
    storm_id ${ID} NOT NULL,
    technician_id ${ID} NOT NULL,
    call_id ${ID} NOT NULL,
    position SMALLINT UNSIGNED NOT NULL,
    state ENUM('planned','offered','accepted','travelling','on-site','done','declined','pulled') NOT NULL,
    locked BOOLEAN NOT NULL DEFAULT FALSE,
    arrive_at DATETIME(3) NOT NULL,
    finish_at DATETIME(3) NOT NULL,
    eta_at DATETIME(3) NULL,
    told_eta_at DATETIME(3) NULL,
    drive_minutes DOUBLE NOT NULL,
    because VARCHAR(300) NOT NULL,
    ended_because VARCHAR(300) NULL,
    accepted_at DATETIME(3) NULL,
    travel_at DATETIME(3) NULL,
    arrived_at DATETIME(3) NULL,
    ended_at DATETIME(3) NULL,
    version INT UNSIGNED NOT NULL DEFAULT 0,
    -- Two technicians can never hold one call, and one technician is never in two places.
    active_call ${ID} AS (IF(state IN ('planned','offered','accepted','travelling','on-site'), call_id, NULL)) VIRTUAL,
    busy_technician ${ID} AS (IF(state IN ('travelling','on-site'), technician_id, NULL)) VIRTUAL,
    UNIQUE KEY one_technician_per_call (active_call),
    UNIQUE KEY one_place_at_a_time (busy_technician),
    KEY on_route (technician_id, state, position),
    KEY of_storm (storm_id, state),
    KEY of_call (call_id),
    FOREIGN KEY (storm_id) REFERENCES storms (id),
    FOREIGN KEY (technician_id) REFERENCES technicians (id),
    FOREIGN KEY (call_id) REFERENCES calls (id),
    CHECK (finish_at >= arrive_at)
  )`);
}

export async function down(run: Run): Promise<void> {
  await run('DROP TABLE stops');
  await run('DROP TABLE plans');
}
