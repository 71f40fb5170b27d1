import type { Run } from '../migrate';

/** An outage area may have several parts, and holes: the coordinates of a MultiPolygon instead of one ring. */
export async function up(run: Run): Promise<void> {
  await run('ALTER TABLE areas CHANGE ring shape MEDIUMTEXT NOT NULL');
  await run("UPDATE areas SET shape = CONCAT('[[', shape, ']]')");
}

/** Of an area with several parts the first is kept, without its holes. */
export async function down(run: Run): Promise<void> {
  await run("UPDATE areas SET shape = JSON_EXTRACT(shape, '$[0][0]')");
  await run('ALTER TABLE areas CHANGE shape ring MEDIUMTEXT NOT NULL');
}
