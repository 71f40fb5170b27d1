import type { CompartmentFacts } from '@shared/domain/cold-unit';
import { woundClock } from '../../calls/wound-clock';
import { json } from '../sql';
import type { Read, Run } from '../migrate';

/** One statement winds this many clocks. */
const BATCH = 500;

/**
 * Power that came back for a while, units that ran or run weakly, ice in a refrigerator, households
 * that can do less without; and how surely contents keep until their save-by. Every stored clock is
 * wound again.
 */
export async function up(run: Run, read: Read): Promise<void> {
  await run(`ALTER TABLE calls
    ADD COLUMN power_on_spans JSON NOT NULL DEFAULT '[]' AFTER power_back_at,
    ADD COLUMN household_at_risk BOOLEAN NOT NULL DEFAULT FALSE AFTER danger`);
  await run(`ALTER TABLE cold_units
    ADD COLUMN cooling ENUM('none','partial','unknown') NOT NULL DEFAULT 'unknown',
    ADD COLUMN ran_between ENUM('yes','no','unknown') NOT NULL DEFAULT 'unknown'`);
  await run(`ALTER TABLE compartments
    ADD COLUMN earliest_at DATETIME(3) NULL AFTER at_risk_at,
    ADD COLUMN likely_at DATETIME(3) NULL AFTER earliest_at`);
  await run("UPDATE compartments SET facts = JSON_SET(facts, '$.ice', JSON_ARRAY())");
  await windAll(run, read);
  await run(`ALTER TABLE compartments
    MODIFY COLUMN earliest_at DATETIME(3) NOT NULL,
    ADD CONSTRAINT spread_in_order CHECK ((likely_at IS NULL) = (save_by_at IS NULL)
      AND (likely_at IS NULL OR (earliest_at <= likely_at AND likely_at <= save_by_at)))`);
}

export async function down(run: Run): Promise<void> {
  await run(`ALTER TABLE compartments
    DROP CONSTRAINT spread_in_order, DROP COLUMN earliest_at, DROP COLUMN likely_at`);
  await run("UPDATE compartments SET facts = JSON_REMOVE(facts, '$.ice')");
  await run('ALTER TABLE cold_units DROP COLUMN cooling, DROP COLUMN ran_between');
  await run('ALTER TABLE calls DROP COLUMN power_on_spans, DROP COLUMN household_at_risk');
}

interface Stored {
  unit_id: string;
  place_no: number;
  kind: string;
  facts: unknown;
  value_cents: number;
  cubic_feet: number | null;
  power_out_at: Date;
  restored_at: Date | null;
}

async function windAll(run: Run, read: Read): Promise<void> {
  for (let last: Stored | undefined, rows: Stored[]; ; last = rows.at(-1)) {
    rows = await read<Stored>(
      `SELECT k.unit_id, k.place_no, k.kind, k.facts, k.value_cents, u.cubic_feet, c.power_out_at,
              c.restored_at
         FROM compartments k JOIN cold_units u ON u.id = k.unit_id JOIN calls c ON c.id = u.call_id
        WHERE (k.unit_id, k.place_no) > (?, ?)
        ORDER BY k.unit_id, k.place_no LIMIT ${String(BATCH)}`,
      [last?.unit_id ?? '', last?.place_no ?? 0],
    );
    if (rows.length === 0) return;
    await run(
      `INSERT INTO compartments (unit_id, place_no, kind, facts, value_cents, at_risk_at,
         earliest_at, likely_at, save_by_at, reasons)
       VALUES ? ON DUPLICATE KEY UPDATE at_risk_at = VALUES(at_risk_at),
         earliest_at = VALUES(earliest_at), likely_at = VALUES(likely_at),
         save_by_at = VALUES(save_by_at), reasons = VALUES(reasons)`,
      [rows.map(woundRow)],
    );
  }
}

function woundRow(row: Stored): unknown[] {
  const facts = json<CompartmentFacts>(row.facts);
  const clock = woundClock(
    {
      lostAt: row.power_out_at.getTime(),
      restoredAt: row.restored_at?.getTime() ?? null,
      powerOnSpans: [],
    },
    { cubicFeet: row.cubic_feet, cooling: 'unknown', ranBetween: 'unknown' },
    facts,
  );
  return [
    row.unit_id,
    row.place_no,
    row.kind,
    JSON.stringify(facts),
    row.value_cents,
    clock.atRiskAt,
    clock.earliestAt,
    clock.likelyAt,
    clock.saveByAt,
    JSON.stringify(clock.reasons),
  ];
}
