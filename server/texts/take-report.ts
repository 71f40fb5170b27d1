import { afterProviderStatus } from '@shared/domain/texts/message-state';
import { machine } from '../commands/actor';
import { orderFrom, runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import { insert } from '../db/sql';
import { applyReports } from './apply-reports';
import { lockMessage, NothingToDo, outgoingState } from './change-message';
import { MessageRecord } from './message-record';
import { webhookCommandId } from './webhook-command-id';

export interface StatusReport {
  readonly sid: string;
  readonly status: string;
  readonly errorCode: string | null;
  /** Our own id of the text, as the callback's address carries it. */
  readonly outboxId: string | null;
}

/**
 * Takes one status callback. They come twice, late, out of order, and before we know ourselves that
 * the text was accepted; our own id in the address says whose it is all the same. One that belongs
 * to nobody yet is kept until its text is known.
 */
export async function takeReport(context: Context, report: StatusReport): Promise<void> {
  const message = await whose(report);
  if (message && !changes(message, report)) return keep(context, report, message.id);

  const { sid, status } = report;
  const order = orderFrom('takeTextStatus', machine('text service'), {
    commandId: webhookCommandId('status', sid, status),
    sid,
    status,
  });
  await runCommand(context, order, async (job) => {
    await keep(context, report, message?.id ?? null, job);
    if (!message) return job.note('message', sid, 'a status came for a text that is not known');
    await apply(job, await lockMessage(job, message.id), report);
  });
}

async function apply(job: Job, message: MessageRecord, report: StatusReport): Promise<void> {
  try {
    await applyReports(job, message, report.sid, [report]);
  } catch (error) {
    if (!(error instanceof NothingToDo)) throw error;
    // Another report overtook this one between the look and the lock.
    job.note('message', message.id, 'a status that was known');
  }
}

async function whose({ outboxId, sid }: StatusReport): Promise<MessageRecord | null> {
  const byOutbox = outboxId === null ? null : await MessageRecord.findByPk(outboxId);
  const message = byOutbox ?? (await MessageRecord.findOne({ where: { providerSid: sid } }));
  return message?.direction === 'out' ? message : null;
}

/** States only ever go up by reports, so a report that changes nothing now never will. */
const changes = (message: MessageRecord, { sid, status }: StatusReport): boolean => {
  const state = outgoingState(message);
  return afterProviderStatus(state, status) !== state || message.providerSid !== sid;
};

function keep(
  { sequelize }: Context,
  { sid, status, errorCode }: StatusReport,
  messageId: string | null,
  job?: Job,
): Promise<void> {
  return insert(
    sequelize,
    `INSERT INTO message_callbacks (provider_sid, status, message_id, error_code, at)
     VALUES (?, ?, ?, ?, UTC_TIMESTAMP(3))
     ON DUPLICATE KEY UPDATE message_id = COALESCE(VALUES(message_id), message_id)`,
    [sid, status, messageId, errorCode],
    job?.tx,
  );
}
