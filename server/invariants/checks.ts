import type { Sequelize } from 'sequelize';
import { mayFollow, type CallState } from '@shared/domain/call-state';
import { select } from '../db/sql';
import { auditHash, FIRST_HASH } from '../commands/audit';

export interface Breach {
  readonly invariant: string;
  readonly found: string;
}

/** A rule about the data that holds at every moment between two commands. */
interface Invariant {
  readonly id: string;
  readonly says: string;
  readonly breaches: (sequelize: Sequelize) => Promise<string[]>;
}

/** Rows that a rule says cannot exist, one line each. */
const none =
  (sql: string): Invariant['breaches'] =>
  async (sequelize) =>
    (await select<Record<string, unknown>>(sequelize, sql)).map((row) => JSON.stringify(row));

const ACTIVE = "('planned','offered','accepted','travelling','on-site')";

export const INVARIANTS: readonly Invariant[] = [
  {
    id: 'one-technician-per-call',
    says: 'A call is on at most one route.',
    breaches: none(
      `SELECT call_id, COUNT(*) AS stops FROM stops WHERE state IN ${ACTIVE}
        GROUP BY call_id HAVING COUNT(*) > 1`,
    ),
  },
  {
    id: 'one-place-at-a-time',
    says: 'A technician travels to or works at one stop at a time.',
    breaches: none(
      `SELECT technician_id, COUNT(*) AS stops FROM stops WHERE state IN ('travelling','on-site')
        GROUP BY technician_id HAVING COUNT(*) > 1`,
    ),
  },
  {
    id: 'call-and-stop-agree',
    says: 'A call on a route has the state of its stop, and a call on none has no such state.',
    breaches: none(
      `SELECT c.id, c.state, s.state AS stop FROM calls c
         LEFT JOIN stops s ON s.call_id = c.id AND s.state IN ${ACTIVE}
        WHERE (c.state IN ${ACTIVE} AND (s.id IS NULL OR s.state <> c.state))
           OR (s.id IS NOT NULL AND c.state NOT IN ${ACTIVE} AND c.state <> 'checking')`,
    ),
  },
  {
    id: 'one-open-call-per-household',
    says: 'A household has at most one open call in a storm.',
    breaches: none(
      `SELECT storm_id, household_id, COUNT(*) AS calls FROM calls
        WHERE settled_at IS NULL AND household_id IS NOT NULL
        GROUP BY storm_id, household_id HAVING COUNT(*) > 1`,
    ),
  },
  {
    id: 'calls-are-numbered',
    says: 'The calls of a storm are numbered from 1 without a gap.',
    breaches: none(
      `SELECT s.id, s.calls_taken, COUNT(c.id) AS calls, MAX(c.number) AS last
         FROM storms s LEFT JOIN calls c ON c.storm_id = s.id
        GROUP BY s.id HAVING calls_taken <> calls OR (calls > 0 AND last <> calls)`,
    ),
  },
  {
    id: 'history-is-a-path',
    says: 'The history of a call is a path through the states, and ends where the call stands.',
    breaches: historyBreaches,
  },
  {
    id: 'every-call-has-clocks',
    says: 'A call has at least one unit, and every unit a compartment with a clock.',
    breaches: none(
      `SELECT c.id FROM calls c LEFT JOIN cold_units u ON u.call_id = c.id
         LEFT JOIN compartments k ON k.unit_id = u.id WHERE k.unit_id IS NULL`,
    ),
  },
  {
    id: 'feeds-have-no-gap',
    says: 'The changes of a stream are numbered from 1 without a gap; only the oldest may be let go.',
    breaches: none(
      `SELECT f.storm_id, f.stream, f.n, COUNT(c.n) AS changes, MIN(c.n) AS first, MAX(c.n) AS last
         FROM feeds f LEFT JOIN feed_changes c ON c.storm_id = f.storm_id AND c.stream = f.stream
        GROUP BY f.storm_id, f.stream
       HAVING f.n <> COALESCE(last, 0) OR (changes > 0 AND changes <> last - first + 1)
           OR (f.n < 1000 AND changes <> f.n)`,
    ),
  },
  {
    id: 'audit-chain-holds',
    says: 'Every audit entry carries the hash of itself and the one before.',
    breaches: auditBreaches,
  },
  {
    id: 'every-command-is-audited',
    says: 'Every command that was applied has an audit entry, and every entry a command.',
    breaches: none(
      `SELECT a.id, a.type FROM applied_commands a
         LEFT JOIN audit_entries e ON e.command_id = a.id WHERE e.n IS NULL
       UNION ALL
       SELECT e.command_id, e.command FROM audit_entries e
         LEFT JOIN applied_commands a ON a.id = e.command_id WHERE a.id IS NULL`,
    ),
  },
  {
    id: 'milestones-are-told-once',
    says: 'A milestone of a call has at most one text, sent or to be sent.',
    breaches: none(
      `SELECT call_id, milestone, dedupe_key, COUNT(*) AS texts FROM messages
        WHERE dedupe_key IS NOT NULL GROUP BY dedupe_key HAVING COUNT(*) > 1`,
    ),
  },
  {
    id: 'no-text-is-forgotten',
    says: 'No text has been due for ten minutes without being sent, failed or shown to a person.',
    breaches: none(
      `SELECT id, state, due_at FROM messages
        WHERE state IN ('new','sending') AND due_at < UTC_TIMESTAMP(3) - INTERVAL 10 MINUTE`,
    ),
  },
  {
    id: 'travel-is-told',
    says: 'Whoever wants texts has an on-the-way text for a technician who travelled to them.',
    breaches: none(
      `SELECT s.id FROM stops s JOIN calls c ON c.id = s.call_id
        WHERE s.travel_at IS NOT NULL AND c.phone IS NOT NULL
          AND NOT EXISTS (SELECT 1 FROM messages m
               WHERE m.call_id = c.id AND m.milestone = 'on-the-way')
          AND c.may_text`,
    ),
  },
  {
    id: 'stop-is-honoured',
    says: 'No text was written to be sent to a number after it opted out, but the one that confirms it.',
    breaches: none(
      `SELECT m.id, m.state, m.milestone FROM messages m JOIN opt_outs o ON o.phone = m.phone
        WHERE m.direction = 'out' AND m.at > o.at
          AND m.state NOT IN ('suppressed','failed')
          AND COALESCE(m.milestone, '') NOT IN ('stop-confirmation','help')`,
    ),
  },
  {
    id: 'storm-roads-have-ground',
    says: 'A storm road lies along a line of two points or more, or around an area of three or more.',
    breaches: none(
      // A ring ends where it begins.
      `SELECT id, kind FROM storm_roads
        WHERE COALESCE(JSON_LENGTH(shape, '$.points') >= 2, JSON_LENGTH(shape, '$.ring') >= 4, 0) = 0`,
    ),
  },
  {
    id: 'night-log-rows-are-accounted-for',
    says: 'An imported log accounts for every one of its rows.',
    breaches: none(
      `SELECT id, row_count, counts FROM night_logs WHERE state = 'imported'
         AND row_count <> JSON_VALUE(counts, '$.calls') + JSON_VALUE(counts, '$.folded')
           + JSON_VALUE(counts, '$.aside') + JSON_VALUE(counts, '$.empty')
           + JSON_VALUE(counts, '$.known')`,
    ),
  },
];

/** Checks every invariant. An empty list means that all hold. */
export async function brokenInvariants(sequelize: Sequelize): Promise<Breach[]> {
  const broken: Breach[] = [];
  for (const { id, says, breaches } of INVARIANTS)
    for (const found of await breaches(sequelize))
      broken.push({ invariant: `${id}: ${says}`, found });
  return broken;
}

async function historyBreaches(sequelize: Sequelize): Promise<string[]> {
  const rows = await select<{
    call_id: string;
    n: number;
    at: Date;
    from_state: CallState | null;
    to_state: CallState;
    state: CallState;
  }>(
    sequelize,
    `SELECT c.id AS call_id, h.n, h.at, h.from_state, h.to_state, c.state
       FROM calls c LEFT JOIN call_changes h ON h.call_id = c.id ORDER BY c.id, h.n`,
  );
  const breaches: string[] = [];
  rows.forEach((row, i) => {
    const before = rows[i - 1]?.call_id === row.call_id ? rows[i - 1] : undefined;
    const after = rows[i + 1]?.call_id === row.call_id ? rows[i + 1] : undefined;
    const isStep = before
      ? row.from_state === before.to_state &&
        row.n === before.n + 1 &&
        mayFollow(before.to_state, row.to_state) &&
        row.at >= before.at
      : row.n === 1 && row.from_state === null;
    if (!isStep) breaches.push(`${row.call_id}: step ${String(row.n)} to ${row.to_state}`);
    if (!after && row.to_state !== row.state)
      breaches.push(`${row.call_id}: history ends in ${row.to_state}, the call is ${row.state}`);
  });
  return breaches;
}

async function auditBreaches(sequelize: Sequelize): Promise<string[]> {
  const entries = await select<{
    chain: string;
    n: number;
    at: Date;
    user_id: string | null;
    actor: string;
    command: string;
    command_id: string;
    entity: string;
    entity_id: string;
    summary: string;
    hash: string;
  }>(sequelize, 'SELECT * FROM audit_entries ORDER BY chain, n');
  const ends = new Map(
    (
      await select<{ chain: string; n: number; hash: string }>(
        sequelize,
        'SELECT chain, n, hash FROM audit_chains',
      )
    ).map((end) => [end.chain, end]),
  );
  const breaches: string[] = [];
  let before = { chain: '', n: 0, hash: FIRST_HASH };
  entries.forEach((row, i) => {
    if (row.chain !== before.chain) before = { chain: row.chain, n: 0, hash: FIRST_HASH };
    const n = Number(row.n);
    const expected = auditHash(before.hash, {
      chain: row.chain,
      n,
      at: row.at,
      userId: row.user_id,
      actor: row.actor,
      command: row.command,
      commandId: row.command_id,
      entity: row.entity,
      entityId: row.entity_id,
      summary: row.summary,
    });
    if (n !== before.n + 1) breaches.push(`${row.chain}: entry ${String(before.n + 1)} is missing`);
    if (row.hash !== expected) breaches.push(`${row.chain}: entry ${String(n)} was changed`);
    before = { chain: row.chain, n, hash: row.hash };
    const end = ends.get(row.chain);
    if (entries[i + 1]?.chain !== row.chain && (Number(end?.n) !== n || end?.hash !== row.hash))
      breaches.push(`${row.chain}: the chain ends before its last entry`);
  });
  return breaches;
}
