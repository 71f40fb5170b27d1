import { afterProviderStatus } from '@shared/domain/texts/message-state';
import type { Job } from '../commands/run-command';
import { select } from '../db/sql';
import { NothingToDo, outgoingState, saveMessage } from './change-message';
import type { MessageRecord } from './message-record';

/** What the text service said of one text. */
export interface Report {
  readonly status: string;
  /** The service's error number, if it gave one. */
  readonly errorCode: string | null;
}

/**
 * Takes over what the service says of a locked text: in an answer, in a status callback or when it
 * was asked. In whichever order reports come, and however often, the end is the same.
 *
 * @param sid the service's own id of the text
 * @throws NothingToDo when nothing changes by it
 */
export async function applyReports(
  job: Job,
  message: MessageRecord,
  sid: string,
  reports: readonly Report[],
): Promise<void> {
  const before = outgoingState(message);
  let state = before;
  for (const { status, errorCode } of reports) {
    const next = afterProviderStatus(state, status);
    if (next === state) continue;
    state = next;
    message.trouble = troubleOf(next, errorCode);
  }
  const isNewSid = message.providerSid !== sid;
  const names = isNewSid ? await mayTakeSid(job, message, sid) : false;
  if (state === before && !names) throw new NothingToDo();

  message.state = state;
  if (names) message.providerSid = sid;
  message.claimToken = null;
  message.claimUntil = null;
  await saveMessage(job, message);
  job.note('message', message.id, state === before ? 'has its name at the text service' : state);
}

/** Callbacks that came for this id before anybody knew whose it was. */
export async function parkedReports(job: Job, sid: string): Promise<Report[]> {
  const rows = await select<{ status: string; error_code: string | null }>(
    job.sequelize,
    'SELECT status, error_code FROM message_callbacks WHERE provider_sid = ?',
    [sid],
    job.tx,
  );
  return rows.map((row) => ({ status: row.status, errorCode: row.error_code }));
}

/**
 * Whether the id is free and the text has none yet. A second id for one text would mean that it was
 * taken twice; the first stays, and the callback's row shows the other.
 */
async function mayTakeSid(job: Job, message: MessageRecord, sid: string): Promise<boolean> {
  if (message.providerSid) return false;
  const others = await select(
    job.sequelize,
    'SELECT 1 FROM messages WHERE provider_sid = ?',
    [sid],
    job.tx,
  );
  return others.length === 0;
}

function troubleOf(state: string, errorCode: string | null): string | null {
  if (state !== 'undelivered' && state !== 'failed') return null;
  const what = state === 'failed' ? 'could not send it' : 'could not deliver it';
  return `The text service ${what}${errorCode ? ` (${errorCode})` : ''}.`;
}
