import type { FaultQueue } from './fake-faults';
import { ERROR_OF_FAILURE, type FakeMessage, type FakeMessages } from './fake-messages';
import type { Webhook, WebhookPoster } from './fake-webhooks';

export interface Deliveries {
  /** Carries an accepted text on: sent, then delivered or not, with a callback for each. */
  begin(message: FakeMessage): void;
  close(): void;
}

const UNFINISHED: ReadonlySet<string> = new Set(['queued', 'sent']);

export const isUnfinished = (message: FakeMessage): boolean =>
  message.direction === 'outbound-api' && UNFINISHED.has(message.status);

/**
 * @param stepMs how long each step of a text takes
 */
export function deliveries(
  messages: FakeMessages,
  faults: FaultQueue,
  webhooks: WebhookPoster,
  accountSid: string,
  stepMs: number,
): Deliveries {
  const timers = new Set<NodeJS.Timeout>();
  const after = (work: () => void): void => {
    const timer = setTimeout(() => {
      timers.delete(timer);
      work();
    }, stepMs);
    timers.add(timer);
  };

  /** One callback after the other: the order on the wire is then the order that we mean. */
  const report = async (callbacks: readonly Webhook[]): Promise<void> => {
    for (const callback of callbacks) {
      for (let copy = 0; copy < faults.callbacks.copies; copy++) await webhooks.post(callback);
    }
  };

  const finish = (message: FakeMessage, held: readonly Webhook[]): void => {
    const end = faults.delivery;
    messages.moveTo(message.sid, end);
    const last = callbackOf(message, end, accountSid);
    void report(held.length > 0 ? [...last, ...held] : last);
  };

  return {
    begin: (message) =>
      after(() => {
        if (message.status === 'queued') messages.moveTo(message.sid, 'sent');
        const sent = callbackOf(message, 'sent', accountSid);
        if (!faults.callbacks.reversed) void report(sent);
        after(() => finish(message, faults.callbacks.reversed ? sent : []));
      }),
    close: () => timers.forEach((timer) => clearTimeout(timer)),
  };
}

/** No callback when the sender named no address for one. */
function callbackOf(message: FakeMessage, status: string, accountSid: string): readonly Webhook[] {
  if (message.statusCallback === null) return [];
  const errorCode = ERROR_OF_FAILURE[status];
  return [
    {
      sid: message.sid,
      url: message.statusCallback,
      reported: status,
      fields: {
        AccountSid: accountSid,
        ApiVersion: '2010-04-01',
        MessageSid: message.sid,
        MessageStatus: status,
        SmsSid: message.sid,
        SmsStatus: status,
        From: message.from,
        To: message.to,
        ...(errorCode === undefined ? {} : { ErrorCode: String(errorCode) }),
      },
    },
  ];
}
