import type { Run } from '../migrate';

/**
 * Every command locks the storm first, then technicians, calls, stops, texts. A foreign key breaks that
 * order behind our back: the database locks the parent row for reading whenever the index that the key
 * uses gets a new entry, and for `(storm_id, state)` that is at every change of state. Whoever held a
 * call and whoever held the storm then waited for each other.
 *
 * So the keys to storms use indexes of columns that never change. The database takes the first that
 * fits, by age.
 */
export async function up(run: Run): Promise<void> {
  await run('ALTER TABLE stops ADD KEY in_storm (storm_id), DROP KEY of_storm');
  await run('ALTER TABLE stops ADD KEY of_storm (storm_id, state)');
  await run('ALTER TABLE calls DROP KEY one_open_call');
  await run('ALTER TABLE calls ADD UNIQUE KEY one_open_call (storm_id, open_household)');
  // A text is written with its call locked, after which no storm may be. Its call has the storm.
  await run('ALTER TABLE messages DROP FOREIGN KEY messages_ibfk_1');
}

export async function down(run: Run): Promise<void> {
  await run(
    'ALTER TABLE messages ADD CONSTRAINT messages_ibfk_1 FOREIGN KEY (storm_id) REFERENCES storms (id)',
  );
  await run('ALTER TABLE stops DROP KEY in_storm');
}
