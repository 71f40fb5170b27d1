import { runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { change, select } from '../db/sql';
import { lockMessage, NothingToDo, saveMessage, unlessDone } from './change-message';
import { outboxOrder } from './hand-over';
import { accepted } from './record-result';
import type { LookUpResult, TextSender } from './send-text';

/** A text that the service has not listed in this time is left to the person who sees it. */
const ASK_FOR_HOURS = 6;
/** The pauses between two looks grow with the age of the question, from 1 s to this. */
const LONGEST_PAUSE_SECONDS = 600;

interface Lost {
  id: string;
  phone: string;
  body: string;
  due_at: Date;
  handed_over_at: Date;
}

/**
 * Asks the text service after texts whose fate is unknown. It only ever finds that a text was
 * taken: that it is not listed proves nothing, so nothing is sent again here.
 */
export async function reconcileUnknown(
  context: Context,
  sender: TextSender,
  leaseMs: number,
): Promise<void> {
  // While a text is unknown its due time is that of the next look, by the database's clock.
  const lost = await select<Lost>(
    context.sequelize,
    `SELECT id, phone, body, due_at,
            claim_until - INTERVAL ? MICROSECOND AS handed_over_at
       FROM messages
      WHERE state = 'unknown' AND due_at <= UTC_TIMESTAMP(3)
        AND claim_until > UTC_TIMESTAMP(3) - INTERVAL ? HOUR
      ORDER BY due_at LIMIT 4`,
    [leaseMs * 1000, ASK_FOR_HOURS],
  );
  await Promise.all(lost.map((text) => look(context, sender, text)));
}

async function look(context: Context, sender: TextSender, text: Lost): Promise<void> {
  if (!(await isMyLook(context, text))) return;
  // A twin without a name at the service: which of the two the list shows, nobody can tell.
  if (await hasTwin(context, text)) return note(context, text.id, TWIN);
  const result = await sender.findByOutboxId({
    to: text.phone,
    body: text.body,
    outboxId: text.id,
    since: text.handed_over_at.getTime(),
    takenSids: await takenSids(context, text.phone),
  });
  if (result.found !== 'one') return note(context, text.id, WORDS[result.found]);
  await unlessDone(
    runCommand(context, outboxOrder('findText', text.id), async (job) => {
      const message = await lockMessage(job, text.id);
      if (message.state !== 'unknown') throw new NothingToDo();
      await accepted(job, message, result.sid, result.status);
    }),
  );
}

const TWIN = 'Another text with the same words to this phone is unknown too.';
const WORDS: Readonly<Record<Exclude<LookUpResult['found'], 'one'>, string | null>> = {
  none: 'The text service does not list it so far.',
  several: 'The text service lists several texts with these words.',
  // The service could not be asked: what is known has not changed.
  unknown: null,
};

/** Of several workers one asks, and moves the next look away by as long as it has lasted so far. */
async function isMyLook({ sequelize }: Context, { id, due_at }: Lost): Promise<boolean> {
  const changed = await change(
    sequelize,
    `UPDATE messages
        SET due_at = UTC_TIMESTAMP(3) + INTERVAL LEAST(GREATEST(
              TIMESTAMPDIFF(SECOND, claim_until, UTC_TIMESTAMP(3)), 1), ?) SECOND
      WHERE id = ? AND state = 'unknown' AND due_at = ?`,
    [LONGEST_PAUSE_SECONDS, id, due_at],
  );
  return changed === 1;
}

async function hasTwin({ sequelize }: Context, { id, phone, body }: Lost): Promise<boolean> {
  const twins = await select(
    sequelize,
    `SELECT 1 FROM messages
      WHERE phone = ? AND direction = 'out' AND body = ? AND id <> ?
        AND provider_sid IS NULL AND attempts > 0 LIMIT 1`,
    [phone, body, id],
  );
  return twins.length > 0;
}

async function takenSids({ sequelize }: Context, phone: string): Promise<ReadonlySet<string>> {
  const rows = await select<{ provider_sid: string }>(
    sequelize,
    'SELECT provider_sid FROM messages WHERE phone = ? AND provider_sid IS NOT NULL',
    [phone],
  );
  return new Set(rows.map((row) => row.provider_sid));
}

/** What a person reads who has to decide; written once, not at every look. */
async function note(context: Context, id: string, words: string | null): Promise<void> {
  if (words === null) return;
  await unlessDone(
    runCommand(context, outboxOrder('lookForText', id), async (job) => {
      const message = await lockMessage(job, id);
      if (message.state !== 'unknown' || message.trouble?.includes(words)) throw new NothingToDo();
      message.trouble = `${message.trouble ?? ''} ${words}`.trim().slice(0, 300);
      await saveMessage(job, message);
      job.note('message', id, 'was looked for in vain');
    }),
  );
}
