import type { Run } from '../migrate';

// VARCHAR, since MariaDB will not index a virtual column over CHAR (its padding depends on sql_mode).
const ID = 'VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin';
const HASH = 'VARCHAR(64) CHARACTER SET ascii COLLATE ascii_bin';

export async function up(run: Run): Promise<void> {
  await run(`CREATE TABLE storm_roads (
    id ${ID} PRIMARY KEY,
    storm_id ${ID} NOT NULL,
    kind ENUM('closed','flooded','slow') NOT NULL,
    state ENUM('reported','confirmed','lifted') NOT NULL,
    name VARCHAR(80) NOT NULL,
    notes VARCHAR(500) NOT NULL,
    shape MEDIUMTEXT NOT NULL,
    starts_at DATETIME(3) NOT NULL,
    ends_at DATETIME(3) NULL,
    speed_share DOUBLE NULL,
    made_by VARCHAR(80) NOT NULL,
    made_at DATETIME(3) NOT NULL,
    lifted_at DATETIME(3) NULL,
    -- What it was before each of its latest changes, newest last, for taking them back.
    earlier MEDIUMTEXT NOT NULL,
    version INT UNSIGNED NOT NULL DEFAULT 0,
    KEY of_storm (storm_id),
    FOREIGN KEY (storm_id) REFERENCES storms (id),
    CONSTRAINT storm_road_ends_after CHECK (ends_at IS NULL OR ends_at > starts_at),
    CONSTRAINT storm_road_has_speed CHECK ((kind = 'slow') = (speed_share IS NOT NULL)),
    CONSTRAINT storm_road_speed_fits CHECK (speed_share IS NULL OR speed_share BETWEEN 0.1 AND 0.9),
    CONSTRAINT storm_road_lifted_when CHECK ((state = 'lifted') = (lifted_at IS NOT NULL))
  )`);
  // Which conditions the routes in force are timed by; empty until any were.
  await run(`ALTER TABLE storms ADD roads_key ${HASH} NOT NULL DEFAULT ''`);
  // Whether nobody can drive there now, and under which conditions and for which place that was looked at.
  await run(
    `ALTER TABLE calls ADD cut_off TINYINT(1) NOT NULL DEFAULT 0, ADD reach_key ${HASH} NULL`,
  );
  await run(`ALTER TABLE stops
    ADD unreachable TINYINT(1) NOT NULL DEFAULT 0,
    -- Where the van was known to be when it set off; NULL when nobody knew.
    ADD travel_from_lon DOUBLE NULL,
    ADD travel_from_lat DOUBLE NULL`);
  await run(`CREATE TABLE drives (
    stop_id ${ID} PRIMARY KEY,
    storm_id ${ID} NOT NULL,
    technician_id ${ID} NOT NULL,
    started_at DATETIME(3) NOT NULL,
    arrived_at DATETIME(3) NOT NULL,
    has_start TINYINT(1) NOT NULL,
    paused TINYINT(1) NOT NULL,
    expected JSON NOT NULL,
    KEY by_time (started_at),
    FOREIGN KEY (stop_id) REFERENCES stops (id)
  )`);
}

export async function down(run: Run): Promise<void> {
  await run('DROP TABLE drives');
  await run('ALTER TABLE stops DROP unreachable, DROP travel_from_lon, DROP travel_from_lat');
  await run('ALTER TABLE calls DROP cut_off, DROP reach_key');
  await run('ALTER TABLE storms DROP roads_key');
  await run('DROP TABLE storm_roads');
}
