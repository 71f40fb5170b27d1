import type { MessageState } from '@shared/domain/texts/message-state';
import { Refusal } from '@shared/domain/errors';
import type { Job } from '../commands/run-command';
import { MessageRecord } from './message-record';
import { toMessageDto } from './message-rows';

/** Thrown inside a command of the machine that finds its work done; everything is rolled back. */
export class NothingToDo extends Error {}

/** Runs a command of the machine that may find its work done. @returns whether there was work */
export async function unlessDone(command: Promise<unknown>): Promise<boolean> {
  try {
    await command;
    return true;
  } catch (error) {
    if (error instanceof NothingToDo) return false;
    throw error;
  }
}

/**
 * The text, locked until the command ends. Texts are locked after storms, technicians, calls and
 * stops.
 *
 * @param version what the writer saw; leave it out where any version will do
 * @throws Refusal `not-found`, or `stale-version` with the text as it is now
 */
export async function lockMessage(job: Job, id: string, version?: number): Promise<MessageRecord> {
  const message = await MessageRecord.findByPk(id, {
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  if (!message) throw new Refusal('not-found', 'There is no such text.');
  if (message.stormId) job.inStorm(message.stormId);
  if (version !== undefined && message.version !== version)
    throw new Refusal(
      'stale-version',
      'The text has changed since you looked.',
      toMessageDto(message),
    );
  return message;
}

/** Saves the text under its next version and has it told. */
export async function saveMessage(job: Job, message: MessageRecord): Promise<void> {
  message.version += 1;
  await message.save({ transaction: job.tx });
  job.touched.messages.add(message.id);
}

/** The state of an outgoing text; a text from a customer has no life to speak of. */
export function outgoingState(message: MessageRecord): MessageState {
  if (message.state === 'received') throw new Error('a text from a customer is not sent');
  return message.state;
}
