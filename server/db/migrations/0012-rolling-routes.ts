import type { Run } from '../migrate';

// VARCHAR, as in the tables beside them.
const ID = 'VARCHAR(36) CHARACTER SET ascii COLLATE ascii_bin';
const HASH = 'VARCHAR(64) CHARACTER SET ascii COLLATE ascii_bin';

/** Breaks, agreed windows, parts fetched on the way, and what keeps routes rolling. */
export async function up(run: Run): Promise<void> {
  await run("ALTER TABLE shifts ADD breaks JSON NOT NULL DEFAULT '[]'");
  // The times that a customer agreed to, for the next visit.
  await run(`ALTER TABLE calls
    ADD window_from DATETIME(3) NULL,
    ADD window_to DATETIME(3) NULL,
    ADD CONSTRAINT window_is_whole CHECK ((window_from IS NULL) = (window_to IS NULL)),
    ADD CONSTRAINT window_ends_after CHECK (window_to IS NULL OR window_to > window_from)`);
  // What the van fetches at the company's store on the way to this stop; NULL: it drives there directly.
  await run('ALTER TABLE stops ADD fetches JSON NULL');
  // How often each technician's near stops were changed by publications, for the limit of each hour.
  await run(`CREATE TABLE route_changes (
    storm_id ${ID} NOT NULL,
    technician_id ${ID} NOT NULL,
    plan_id ${ID} NOT NULL,
    at DATETIME(3) NOT NULL,
    changes SMALLINT UNSIGNED NOT NULL,
    PRIMARY KEY (plan_id, technician_id),
    KEY lately (storm_id, at)
  )`);
  // Which facts routes were last planned from by themselves, and who is at it, by the database's clock. No
  // foreign key: it would read the storm's row under a lock at each claim.
  await run(`CREATE TABLE rolling_plans (
    storm_id ${ID} PRIMARY KEY,
    facts_key ${HASH} NOT NULL DEFAULT '',
    holder ${ID} NULL,
    held_until DATETIME(3) NULL
  )`);
}

export async function down(run: Run): Promise<void> {
  await run('DROP TABLE rolling_plans');
  await run('DROP TABLE route_changes');
  await run('ALTER TABLE stops DROP fetches');
  await run(
    'ALTER TABLE calls DROP CONSTRAINT window_is_whole, DROP CONSTRAINT window_ends_after, DROP window_from, DROP window_to',
  );
  await run('ALTER TABLE shifts DROP breaks');
}
