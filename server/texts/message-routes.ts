import type { MessageDto } from '@shared/contract/messages';
import { Refusal } from '@shared/domain/errors';
import { textLength } from '@shared/domain/texts/segments';
import { callDetail } from '../calls/call-detail';
import { lockCall, lockCallOfAnyStorm } from '../calls/change-call';
import { orderFrom, runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { readSettings } from '../office/settings';
import { findStorm } from '../storms/storm-queries';
import { saveMessage } from './change-message';
import { messageList } from './message-list';
import { MessageRecord } from './message-record';
import { toMessageDto } from './message-rows';
import { hasOptedOut, queueText } from './queue-text';
import { resolveMessage } from './resolve-message';
import { hoursOf } from './still-due';

type Names = 'sendMessage' | 'readMessages' | 'listMessages' | 'resolveMessage';

/** Texts: written by a person, read, listed, and decided about when their fate is unknown. */
export function messageRoutes(context: Context): SomeHandlers<Names> {
  return {
    sendMessage: ({ params, body, person }) =>
      runCommand(context, orderFrom('sendMessage', person, { ...body, ...params }), (job) =>
        sendMessage(job, params.callId, body.body),
      ),

    readMessages: ({ params, body, person }) =>
      runCommand(
        context,
        orderFrom('readMessages', person, { ...body, ...params }),
        async (job) => {
          await readMessages(job, params.callId);
          return callDetail(context.sequelize, params.callId, job.now, job.tx);
        },
      ),

    listMessages: async ({ params }) => {
      await findStorm(params.stormId);
      return messageList(context.sequelize, params.stormId);
    },

    resolveMessage: ({ params, body, person }) =>
      runCommand(context, orderFrom('resolveMessage', person, { ...body, ...params }), (job) =>
        resolveMessage(job, params.messageId, body),
      ),
  };
}

async function sendMessage(job: Job, callId: string, body: string): Promise<MessageDto> {
  const call = await lockCall(job, callId);
  if (!call.phone) throw new Refusal('no-phone', 'This call has no phone number to text.');
  if (!call.mayText || (await hasOptedOut(job, call.phone)))
    throw new Refusal('opted-out', 'This household wants no texts; ring them instead.');
  const settings = await readSettings(job.sequelize, job.tx);
  const message = await queueText(
    job,
    {
      stormId: call.stormId,
      callId: call.id,
      phone: call.phone,
      mayText: call.mayText,
      body,
      milestone: null,
      hoursOf: await hoursOf(job, { callId: call.id }),
      dedupeKey: null,
    },
    settings,
  );
  if (!message) throw new Error('a text without a key cannot exist already');
  job.note(
    'message',
    message.id,
    `wrote a text of ${String(textLength(body).segments)} segments on call ${String(call.number)}`,
  );
  return toMessageDto(message);
}

async function readMessages(job: Job, callId: string): Promise<void> {
  const call = await lockCallOfAnyStorm(job, callId);
  const unread = await MessageRecord.findAll({
    where: { callId, direction: 'in', readAt: null },
    order: [['id', 'ASC']],
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  for (const message of unread) {
    message.readAt = job.at;
    await saveMessage(job, message);
  }
  if (unread.length > 0) job.touched.call(callId);
  job.note('call', callId, `read the texts of call ${String(call.number)}`);
}
