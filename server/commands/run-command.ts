import { createHash } from 'node:crypto';
import type { Sequelize, Transaction } from 'sequelize';
import { Refusal } from '@shared/domain/errors';
import type { Instant } from '@shared/domain/instant';
import type { Context } from '../context';
import { insert, isDuplicateOf, select, change } from '../db/sql';
import { inTransaction } from '../db/transaction';
import type { RoadsPort } from '../workers/ports';
import type { Actor } from './actor';
import { appendAudit, type AuditNote } from './audit';
import { appendChanges } from './feed';
import { Touched } from './touched';

export interface Order {
  readonly actor: Actor;
  /** The route's name, or the name of what the machine does. */
  readonly type: string;
  /** Made by whoever gives the order; the same id again changes nothing. */
  readonly commandId: string;
  /** What was asked, so that an id cannot be reused for something else. */
  readonly asked: unknown;
}

/** The order behind a route's request. `asked` is the body and the ids of the path. */
export const orderFrom = (
  type: string,
  actor: Actor,
  asked: { readonly commandId: string; readonly [field: string]: unknown },
): Order => ({ actor, type, commandId: asked.commandId, asked });

/** What a command has at hand while its transaction is open. */
export interface Job {
  readonly sequelize: Sequelize;
  readonly tx: Transaction;
  readonly now: Instant;
  readonly at: Date;
  readonly actor: Actor;
  /** IANA name of the region's time zone, for quiet hours and times in texts. */
  readonly zone: string;
  /** Travel along the region's roads; `null` where there are none. */
  readonly roads: RoadsPort | null;
  /** Which rows changed. Boards and phones are told of them once the command is certain. */
  readonly touched: Touched;
  /** Which storm it concerns; its board is told and its audit chain grows. */
  inStorm(stormId: string): void;
  /** One line of the audit trail. Every command writes at least one. */
  note(entity: string, entityId: string, summary: string): void;
  /** Runs once the command is certain. */
  afterCommit(act: () => void): void;
}

/** What a command needs of the server; the command line has no more than this. */
export type CommandContext = Pick<
  Context,
  'sequelize' | 'clock' | 'region' | 'live' | 'wakeOutbox'
> &
  Partial<Pick<Context, 'roads'>>;

/**
 * Runs one change: in one transaction with its audit entry, its numbered announcements and its
 * outgoing texts. A repeat of the same command id gets the first reply and changes nothing.
 *
 * @throws Refusal when a rule says no; then nothing has changed
 */
export async function runCommand<R>(
  context: CommandContext,
  order: Order,
  work: (job: Job) => Promise<R>,
): Promise<R> {
  const fingerprint = fingerprintOf(order);
  const later: (() => void)[] = [];
  let storm: string | null = null;
  let hasTexts = false;

  const reply = await inTransaction(context.sequelize, async (tx) => {
    // A retried attempt starts clean.
    later.length = 0;
    storm = null;
    const now = context.clock();
    if (!(await isFirst(context, order, fingerprint, now, tx)))
      return firstReply<R>(context, order, fingerprint, tx);

    const notes: AuditNote[] = [];
    const touched = new Touched();
    const job: Job = {
      sequelize: context.sequelize,
      tx,
      now,
      at: new Date(now),
      actor: order.actor,
      zone: context.region.dto.timeZone,
      roads: context.roads ?? null,
      touched,
      inStorm: (stormId) => (storm = stormId),
      note: (entity, entityId, summary) => notes.push({ entity, entityId, summary }),
      afterCommit: (act) => later.push(act),
    };
    const result = await work(job);
    if (notes.length === 0) throw new Error(`${order.type} wrote no audit entry`);

    await change(
      context.sequelize,
      'UPDATE applied_commands SET reply = ? WHERE id = ?',
      [JSON.stringify(result ?? null), order.commandId],
      tx,
    );
    // The counters come last: they are the one row that all commands share, and so held briefly.
    await appendAudit(context.sequelize, { order, notes, at: job.at, stormId: storm }, tx);
    storm = await appendChanges(context.sequelize, { touched, stormId: storm, now }, tx);
    hasTexts = touched.messages.size > 0;
    return result;
  });

  if (storm !== null) context.live.ring(storm);
  if (hasTexts) context.wakeOutbox();
  for (const act of later) act();
  return reply;
}

async function isFirst(
  { sequelize }: CommandContext,
  { commandId, actor, type }: Order,
  fingerprint: string,
  now: Instant,
  tx: Transaction,
): Promise<boolean> {
  try {
    // Two copies that arrive at once: the second waits here until the first has committed.
    await insert(
      sequelize,
      'INSERT INTO applied_commands (id, user_id, type, fingerprint, at) VALUES (?, ?, ?, ?, ?)',
      [commandId, actor.userId, type, fingerprint, new Date(now)],
      tx,
    );
    return true;
  } catch (error) {
    if (isDuplicateOf(error, 'PRIMARY')) return false;
    throw error;
  }
}

async function firstReply<R>(
  { sequelize }: CommandContext,
  { commandId }: Order,
  fingerprint: string,
  tx: Transaction,
): Promise<R> {
  const [first] = await select<{ fingerprint: string; reply: string | null }>(
    sequelize,
    'SELECT fingerprint, reply FROM applied_commands WHERE id = ?',
    [commandId],
    tx,
  );
  if (first?.fingerprint === fingerprint && first.reply === null)
    throw new Refusal(
      'command-id-reused',
      'This was carried out long ago. Look at how things are now before you ask for more.',
    );
  if (!first || first.fingerprint !== fingerprint || first.reply === null)
    throw new Refusal(
      'command-id-reused',
      'This command id was used before for something else. Make a new one.',
    );
  return JSON.parse(first.reply) as R;
}

function fingerprintOf({ actor, type, asked }: Order): string {
  return createHash('sha256')
    .update(JSON.stringify([actor.userId, actor.name, type, asked]))
    .digest('hex');
}
