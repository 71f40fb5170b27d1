import { createHmac } from 'node:crypto';
import { setMaxListeners } from 'node:events';

import type { Journal } from './fake-journal';

/**
 * The signature of a webhook: HMAC-SHA1 with the account's token over the full address followed by
 * each form field's name and value in the order of the names, in base64. It holds no time, so a
 * signed webhook can be replayed for ever; the receiver has to remember what it has seen.
 */
export function webhookSignature(
  authToken: string,
  url: string,
  fields: Readonly<Record<string, string>>,
): string {
  const signed = Object.keys(fields)
    .sort()
    .reduce((text, name) => text + name + (fields[name] ?? ''), url);
  return createHmac('sha1', authToken).update(signed, 'utf8').digest('base64');
}

/** How long the receiver may take. The real service waits longer; a local product should not need it. */
const ANSWER_WITHIN_MS = 5_000;

export interface Webhook {
  readonly sid: string;
  readonly url: string;
  readonly reported: string | null;
  readonly fields: Readonly<Record<string, string>>;
}

export interface WebhookPoster {
  /** Posts until it is answered below 500, or the retries are used up. Resolves with the last answer. */
  post(webhook: Webhook): Promise<number | null>;
  /** Ends waiting retries. */
  close(): void;
}

/** Posts signed webhooks, and tries again when the product is down or answers 5xx. */
export function webhookPoster(
  authToken: string,
  journal: Journal,
  retryAfterMs: readonly number[],
): WebhookPoster {
  const closing = new AbortController();
  // One listener for each webhook on its way; there may be many.
  setMaxListeners(0, closing.signal);

  const postOnce = async ({ sid, url, reported, fields }: Webhook): Promise<number | null> => {
    const httpStatus = await fetch(url, {
      method: 'POST',
      headers: {
        'Content-Type': 'application/x-www-form-urlencoded',
        'X-Twilio-Signature': webhookSignature(authToken, url, fields),
      },
      body: new URLSearchParams(fields).toString(),
      redirect: 'manual',
      signal: AbortSignal.any([closing.signal, AbortSignal.timeout(ANSWER_WITHIN_MS)]),
    }).then(
      (answer) => answer.status,
      // Nobody listens, too slow, or we are closing: the journal says that nothing was answered.
      () => null,
    );
    if (!closing.signal.aborted) {
      journal.append({ kind: 'webhook', sid, url, reported, httpStatus });
    }
    return httpStatus;
  };

  return {
    post: async (webhook) => {
      let answered = await postOnce(webhook);
      for (const delayMs of retryAfterMs) {
        if (closing.signal.aborted || (answered !== null && answered < 500)) break;
        await pause(delayMs, closing.signal);
        if (!closing.signal.aborted) answered = await postOnce(webhook);
      }
      return answered;
    },
    close: () => closing.abort(),
  };
}

function pause(delayMs: number, signal: AbortSignal): Promise<void> {
  return new Promise((resolve) => {
    const timer = setTimeout(resolve, delayMs);
    signal.addEventListener('abort', () => {
      clearTimeout(timer);
      resolve();
    });
  });
}
