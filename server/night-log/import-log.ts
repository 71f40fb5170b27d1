import { createHash, randomUUID } from 'node:crypto';
import { setImmediate as breathe } from 'node:timers/promises';
import type { ColumnMap } from '@shared/domain/night-log/column-map';
import type { Household } from '@shared/domain/night-log/fold-duplicates';
import type { NightCall, RowReading } from '@shared/domain/night-log/night-call';
import { Refusal } from '@shared/domain/errors';
import { lockCall, saveCall, writeRemark } from '../calls/change-call';
import { takeCalls, type CallToTake } from '../calls/take-call';
import type { Actor } from '../commands/actor';
import { runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import { select } from '../db/sql';
import { StormRecord } from '../storms/storm-record';
import { readSettings } from '../office/settings';
import { callFromLog, remarkOf } from './call-from-log';
import { logToRead } from './log-context';
import { NightLogRecord, NightLogRowRecord } from './night-log-record';
import { NO_COUNTS, nightLogDto } from './night-log-rows';

/** Households to a transaction: few enough to let the phones in between, enough to be quick. */
const PIECE = 60;
const MOST_TRIES = 3;

type RowFate = Pick<NightLogRowRecord, 'outcome' | 'reason' | 'callId'>;

/**
 * Imports a night log whose columns a person has confirmed. It goes in pieces, each one command, so
 * that it can be told of, and taken up again where it was if the server stops in between: a row is
 * known by its own cells, and a known row changes nothing.
 */
export async function importLog(context: Context, logId: string, actor: Actor): Promise<void> {
  const log = await NightLogRecord.findByPk(logId);
  if (!log) return;
  try {
    const columns = { columns: JSON.parse(log.columns) as ColumnMap['columns'] };
    const { reading } = await context.logReader.run(
      await logToRead(context, log.stormId, log.bytes, columns),
    );
    const counts = { ...NO_COUNTS, empty: reading.counts.empty };
    const byKey = new Map(reading.rows.map((row) => [row.key, row]));
    const known = await knownRows(context, log.stormId, [...byKey.keys()]);
    const tell = async (): Promise<void> => {
      await log.update({ counts: { ...counts }, doneCount: sum(counts) });
      context.live.nightLogProgressed(await nightLogDto(log));
    };

    const others = reading.rows.filter(
      ({ result }) => result.kind === 'aside' || result.kind === 'continued',
    );
    await storeOthers(context, log, actor, others, known, counts);
    await tell();
    for (let i = 0; i < reading.households.length; i += PIECE) {
      const piece = reading.households.slice(i, i + PIECE);
      await importPiece(context, log, actor, { piece, byKey, known, counts });
      await tell();
    }
    await log.update({ state: 'imported', trouble: null });
  } catch (error) {
    context.log.error({ err: error, logId }, 'a night log could not be imported');
    await log.update({
      state: 'failed',
      trouble: 'The import stopped half-way. Import it again: what is in is not taken twice.',
    });
  }
  context.live.nightLogProgressed(await nightLogDto(log));
}

/** Takes up imports that a stop of the server cut short. */
export async function resumeImports(context: Context, actor: Actor): Promise<void> {
  for (const log of await NightLogRecord.findAll({ where: { state: 'importing' } }))
    await importLog(context, log.id, actor);
}

const sum = (counts: Record<string, number>): number =>
  Object.values(counts).reduce((total, count) => total + count, 0);

interface Piece {
  readonly piece: readonly Household[];
  readonly byKey: ReadonlyMap<string, RowReading>;
  /** Rows that the storm has already, with the call that they went into. */
  readonly known: ReadonlyMap<string, string | null>;
  readonly counts: typeof NO_COUNTS;
}

async function importPiece(
  context: Context,
  log: NightLogRecord,
  actor: Actor,
  { piece, byKey, known, counts }: Piece,
): Promise<void> {
  const fresh = piece.filter(({ rows }) => rows.some(({ key }) => !known.has(key)));
  counts.known += piece.reduce(
    (count, { rows }) => count + rows.filter(({ key }) => known.has(key)).length,
    0,
  );
  if (fresh.length === 0) return;

  const storm = await StormRecord.findByPk(log.stormId);
  const values = await readSettings(context.sequelize);
  const toTake = new Map<Household, CallToTake>();
  for (const [i, household] of fresh.entries()) {
    toTake.set(
      household,
      callFromLog(household.call, {
        region: context.region,
        stormBegan: storm?.openedAt.getTime() ?? context.clock(),
        now: context.clock(),
        values,
      }),
    );
    // Looking up an address takes a millisecond; boards are served in between.
    if (i % 8 === 7) await breathe();
  }

  for (let tries = 1; ; tries++) {
    try {
      const added = await runCommand(
        context,
        {
          actor,
          type: 'importNightLog',
          commandId: pieceId(log.id, fresh, tries),
          asked: log.id,
        },
        (job) => takePiece(job, log, fresh, toTake, byKey, known),
      );
      counts.calls += added.calls;
      counts.folded += added.folded;
      return;
    } catch (error) {
      // Somebody took one of these households by phone just now: look again and fold it in.
      const isRace = error instanceof Refusal && error.code === 'household-has-open-call';
      if (!isRace || tries === MOST_TRIES) throw error;
    }
  }
}

async function takePiece(
  job: Job,
  log: NightLogRecord,
  fresh: readonly Household[],
  toTake: ReadonlyMap<Household, CallToTake>,
  byKey: ReadonlyMap<string, RowReading>,
  known: ReadonlyMap<string, string | null>,
): Promise<{ calls: number; folded: number }> {
  job.inStorm(log.stormId);
  const open = await openCallsByPhone(
    job,
    log.id,
    log.stormId,
    fresh.flatMap(({ call }) => call.phone?.e164 ?? []),
  );
  const fates = new Map<string, RowFate>();
  const taken: CallToTake[] = [];
  for (const household of fresh) {
    const told = toTake.get(household);
    if (!told) continue;
    const before = household.rows.map(({ key }) => known.get(key)).find((callId) => callId);
    const there = before ?? matching(open, told, household.call);
    if (there) {
      await foldIn(job, there, household.call);
      mark(fates, household, known, (i) => ({
        outcome: 'folded',
        reason: i === 0 ? 'The household has an open call' : (household.rows[i]?.reason ?? ''),
        callId: there,
      }));
      continue;
    }
    // The same number with an open call at another address: both are kept, and kept apart.
    const isHousehold = told.phone !== null && !open.has(told.phone);
    taken.push({ ...told, isHousehold });
    if (isHousehold && told.phone !== null)
      open.set(told.phone, { id: told.callId, text: told.address.text, isOfThisLog: true });
    mark(fates, household, known, (i) => ({
      outcome: i === 0 ? 'call' : 'folded',
      reason: household.rows[i]?.reason ?? '',
      callId: told.callId,
    }));
  }
  if (taken.length > 0) await takeCalls(job, log.stormId, taken);
  await storeRows(
    job,
    log,
    [...fates].flatMap(([key, fate]) => {
      const row = byKey.get(key);
      return row ? [{ row, fate }] : [];
    }),
  );
  job.note('night log', log.id, `imported ${String(fates.size)} rows`);
  const calls = [...fates.values()].filter(({ outcome }) => outcome === 'call').length;
  return { calls, folded: fates.size - calls };
}

function mark(
  fates: Map<string, RowFate>,
  household: Household,
  known: ReadonlyMap<string, string | null>,
  fate: (i: number) => RowFate,
): void {
  household.rows.forEach(({ key }, i) => {
    if (!known.has(key)) fates.set(key, fate(i));
  });
}

/** Open calls by the phone of their household. */
type OpenCalls = Map<
  string,
  { readonly id: string; readonly text: string; readonly isOfThisLog: boolean }
>;

async function openCallsByPhone(
  job: Job,
  logId: string,
  stormId: string,
  phones: readonly string[],
): Promise<OpenCalls> {
  if (phones.length === 0) return new Map();
  const rows = await select<{
    id: string;
    phone: string;
    address_text: string;
    of_this_log: number;
  }>(
    job.sequelize,
    `SELECT c.id, h.phone, c.address_text,
            EXISTS (SELECT 1 FROM night_log_rows r
                     WHERE r.call_id = c.id AND r.log_id = ?) AS of_this_log
       FROM households h
       JOIN calls c ON c.open_household = h.id AND c.storm_id = ? WHERE h.phone IN (?)`,
    [logId, stormId, phones],
    job.tx,
  );
  return new Map(
    rows.map(({ id, phone, address_text, of_this_log }) => [
      phone,
      { id, text: address_text, isOfThisLog: Boolean(of_this_log) },
    ]),
  );
}

/**
 * The open call of the same phone, unless the two name different houses. Rows of one log have been
 * compared with each other already, and better: by name, house and apartment.
 */
function matching(open: OpenCalls, told: CallToTake, call: NightCall): string | undefined {
  const there = told.phone === null ? undefined : open.get(told.phone);
  if (!there || there.isOfThisLog) return undefined;
  if (!call.address) return there.id;
  const houseOf = (text: string): string =>
    text
      .toLowerCase()
      .replace(/[^a-z0-9 ]/g, '')
      .split(' ')
      .slice(0, 2)
      .join(' ');
  return houseOf(there.text) === houseOf(told.address.text) ? there.id : undefined;
}

async function foldIn(job: Job, callId: string, call: NightCall): Promise<void> {
  const record = await lockCall(job, callId);
  const text = remarkOf(call);
  await writeRemark(job, callId, `Night log: ${text || 'rang'}`);
  record.danger = record.danger || call.dangers.length > 0;
  await saveCall(job, record);
}

/** Rows for a person, and those that only carry on the message of another. */
async function storeOthers(
  context: Context,
  log: NightLogRecord,
  actor: Actor,
  rows: readonly RowReading[],
  known: ReadonlyMap<string, string | null>,
  counts: typeof NO_COUNTS,
): Promise<void> {
  const fresh = rows.filter(({ key }) => !known.has(key));
  counts.known += rows.length - fresh.length;
  if (fresh.length === 0) return;
  const fates = fresh.map((row) => {
    const { result } = row;
    const fate: RowFate =
      result.kind === 'aside'
        ? { outcome: 'aside', reason: result.reason, callId: null }
        : { outcome: 'folded', reason: 'More of the message above', callId: null };
    return { row, fate };
  });
  await runCommand(
    context,
    { actor, type: 'importNightLog', commandId: randomUUID(), asked: log.id },
    async (job) => {
      job.inStorm(log.stormId);
      await storeRows(job, log, fates);
      job.note('night log', log.id, `put ${String(fresh.length)} rows aside or with others`);
      return null;
    },
  );
  counts.aside += fates.filter(({ fate }) => fate.outcome === 'aside').length;
  counts.folded += fates.filter(({ fate }) => fate.outcome === 'folded').length;
}

async function storeRows(
  job: Job,
  log: NightLogRecord,
  rows: readonly { readonly row: RowReading; readonly fate: RowFate }[],
): Promise<void> {
  await NightLogRowRecord.bulkCreate(
    rows.map(({ row, fate }) => ({
      id: randomUUID(),
      logId: log.id,
      stormId: log.stormId,
      line: row.line,
      rowKey: row.key,
      cells: JSON.stringify(row.cells),
      understood:
        row.result.kind === 'understood' || row.result.kind === 'aside'
          ? JSON.stringify(row.result.call)
          : null,
      ...fate,
      reason: fate.reason.slice(0, 300),
    })),
    { transaction: job.tx },
  );
}

/** Rows that the storm has already, with the call that they went into. */
export async function knownRows(
  { sequelize }: Context,
  stormId: string,
  keys: readonly string[],
): Promise<Map<string, string | null>> {
  const known = new Map<string, string | null>();
  for (let i = 0; i < keys.length; i += 1000)
    for (const row of await select<{ row_key: string; call_id: string | null }>(
      sequelize,
      'SELECT row_key, call_id FROM night_log_rows WHERE storm_id = ? AND row_key IN (?)',
      [stormId, keys.slice(i, i + 1000)],
    ))
      known.set(row.row_key, row.call_id);
  return known;
}

/** The same piece has the same id, so that an import that is taken up again repeats nothing. */
function pieceId(logId: string, fresh: readonly Household[], tries: number): string {
  const hex = createHash('sha256')
    .update(`${logId} ${String(tries)} `)
    .update(fresh.flatMap(({ rows }) => rows.map(({ key }) => key)).join(' '))
    .digest('hex');
  const version = `4${hex.slice(13, 16)}`;
  return [
    hex.slice(0, 8),
    hex.slice(8, 12),
    version,
    `8${hex.slice(17, 20)}`,
    hex.slice(20, 32),
  ].join('-');
}
