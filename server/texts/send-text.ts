import twilio from 'twilio';
import type RequestClient from 'twilio/lib/base/RequestClient';
import type Response from 'twilio/lib/http/response';

import { judgeFailure, type SendFailure } from '@shared/domain/texts/message-state';

export interface TextSenderOptions {
  readonly accountSid: string;
  readonly authToken: string;
  /** Where the service answers; null for the service itself, an address for the local stand-in. */
  readonly baseUrl: string | null;
  /** Our number, E.164. */
  readonly from: string;
  /** Our public address for delivery reports; each text adds its own `outbox` to the query. */
  readonly statusCallbackUrl: string;
  readonly timeoutMs?: number;
}

export interface OutgoingText {
  /** E.164. */
  readonly to: string;
  readonly body: string;
  readonly outboxId: string;
}

export type SendResult =
  | { readonly outcome: 'accepted'; readonly sid: string; readonly status: string }
  /** Not accepted for sure. */
  | {
      readonly outcome: 'refused';
      readonly code: number | null;
      readonly retryable: boolean;
      readonly words: string;
    }
  /** It may have been accepted: never send again by itself. */
  | { readonly outcome: 'unknown'; readonly why: string };

export interface LookUp extends OutgoingText {
  /** When the first try to send it began, milliseconds since 1970. */
  readonly since: number;
  /** Provider ids that already belong to other texts of the outbox. */
  readonly takenSids: ReadonlySet<string>;
}

export type LookUpResult =
  | { readonly found: 'one'; readonly sid: string; readonly status: string }
  /** More than one text fits; a person has to look. */
  | { readonly found: 'several'; readonly sids: readonly string[] }
  /** The list does not show it. It may lag, so this alone never allows a second send. */
  | { readonly found: 'none' }
  | { readonly found: 'unknown'; readonly why: string };

export interface TextSender {
  send(text: OutgoingText): Promise<SendResult>;
  findByOutboxId(text: LookUp): Promise<LookUpResult>;
}

/** Long enough for a slow answer, short enough that a stuck one does not hold the outbox. */
const DEFAULT_TIMEOUT_MS = 3_000;

/** The service tells whole seconds and its clock is not ours. */
const CLOCK_SLACK_MS = 60_000;

/** A household gets a handful of texts in a storm; this many newest ones cover any of them. */
const LOOK_BACK_TEXTS = 200;

/** Hands texts to the hosted service. It never sends twice by itself: retrying is the outbox's decision. */
export function createTextSender(options: TextSenderOptions): TextSender {
  const client = twilio(options.accountSid, options.authToken, {
    autoRetry: false,
    httpClient: new LocalRequestClient(options.baseUrl, options.timeoutMs ?? DEFAULT_TIMEOUT_MS),
  });

  return {
    send: async ({ to, body, outboxId }) => {
      try {
        const message = await client.messages.create({
          to,
          body,
          from: options.from,
          statusCallback: statusCallbackFor(options.statusCallbackUrl, outboxId),
        });
        // An answer that names no message is no acceptance that we could ever follow up.
        return isSid(message.sid)
          ? { outcome: 'accepted', sid: message.sid, status: message.status }
          : { outcome: 'unknown', why: 'The text service answered without naming the text.' };
      } catch (error) {
        // RestException (an HTTP answer), an AxiosError (the network) or a SyntaxError (no JSON).
        const failure = failureOf(error);
        const verdict = judgeFailure(failure);
        return verdict.outcome === 'refused'
          ? { ...verdict, code: failure.providerCode ?? null }
          : verdict;
      }
    },

    findByOutboxId: async ({ to, body, since, takenSids }) => {
      try {
        const newest = await client.messages.list({
          to,
          from: options.from,
          limit: LOOK_BACK_TEXTS,
          pageSize: LOOK_BACK_TEXTS,
        });
        // The list does not give our callback address back, so the text itself is what we know it by.
        const fits = newest.filter(
          (message) =>
            message.body === body &&
            !takenSids.has(message.sid) &&
            message.dateCreated.getTime() >= since - CLOCK_SLACK_MS,
        );
        const [first, second] = fits;
        if (!first) return { found: 'none' };
        if (second) return { found: 'several', sids: fits.map(({ sid }) => sid) };
        return { found: 'one', sid: first.sid, status: first.status };
      } catch (error) {
        // The same three kinds as above; none of them says anything about the text.
        const { httpStatus, networkCode } = failureOf(error);
        return {
          found: 'unknown',
          why: `The text service could not be asked (${httpStatus ?? networkCode ?? 'unreadable answer'}).`,
        };
      }
    },
  };
}

/** Our address for delivery reports with the outbox row in it, so that a report names its row. */
export function statusCallbackFor(statusCallbackUrl: string, outboxId: string): string {
  const url = new URL(statusCallbackUrl);
  url.searchParams.set('outbox', outboxId);
  return url.href;
}

/**
 * Sends the SDK's requests to another base address when there is one.
 *
 * Connections are not kept: a kept one that the other side has closed looks like a break after
 * the text was handed over, and would make a harmless failure unknown.
 */
class LocalRequestClient extends twilio.RequestClient {
  constructor(
    private readonly baseUrl: string | null,
    timeoutMs: number,
  ) {
    super({ timeout: timeoutMs, autoRetry: false, keepAlive: false });
  }

  override request<T>(opts: RequestClient.RequestOptions<T>): Promise<Response<T>> {
    if (this.baseUrl === null) return super.request(opts);
    const { pathname, search } = new URL(opts.uri);
    return super.request({ ...opts, uri: `${this.baseUrl}${pathname}${search}` });
  }
}

function failureOf(error: unknown): SendFailure {
  if (typeof error !== 'object' || error === null) return {};
  const { status, code, syscall, cause } = error as Record<string, unknown>;
  if (error instanceof twilio.RestException) {
    return { httpStatus: error.status, providerCode: error.code };
  }
  if (typeof status === 'number' && typeof code === 'number') {
    return { httpStatus: status, providerCode: code };
  }
  if (typeof code !== 'string') return {};
  const deeper =
    typeof cause === 'object' && cause !== null ? (cause as { syscall?: unknown }) : {};
  return {
    networkCode: code,
    whileConnecting: syscall === 'connect' || deeper.syscall === 'connect',
  };
}

const isSid = (sid: unknown): sid is string =>
  typeof sid === 'string' && /^(?:SM|MM)[0-9a-f]{32}$/.test(sid);
