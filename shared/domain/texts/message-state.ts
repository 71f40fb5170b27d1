/**
 * The life of one outgoing text.
 *
 * `new` -> `sending` (claimed, about to be written to the provider) -> `sent` (the provider has
 * accepted it) -> `delivered`, `undelivered` or `failed`. `unknown` is a text that may or may not
 * have been accepted: it is never sent again by itself. `suppressed` was never sent (opt-out).
 */
export const MESSAGE_STATES = [
  'new',
  'sending',
  'sent',
  'delivered',
  'undelivered',
  'failed',
  'unknown',
  'suppressed',
] as const;
export type MessageState = (typeof MESSAGE_STATES)[number];

/** What a report of the provider proves, whatever we had thought before. */
const REPORTED = ['sent', 'delivered', 'undelivered', 'failed'] as const;

const FOLLOWS: Readonly<Record<MessageState, readonly MessageState[]>> = {
  new: ['sending', 'suppressed', ...REPORTED],
  // Back to `new` only when the provider has not accepted it for sure.
  sending: ['new', 'unknown', 'suppressed', ...REPORTED],
  // Back to `new` only by a person who has seen that it is unknown and wants it sent.
  unknown: ['new', 'suppressed', ...REPORTED],
  sent: ['delivered', 'undelivered', 'failed'],
  delivered: [],
  undelivered: ['delivered'],
  failed: ['undelivered', 'delivered'],
  suppressed: [...REPORTED],
};

export const mayMessageBecome = (from: MessageState, to: MessageState): boolean =>
  FOLLOWS[from].includes(to);

/** Whether nothing more is to be done about the text by anybody. `unknown` waits for a person. */
export const isMessageFinal = (state: MessageState): boolean =>
  state === 'delivered' || state === 'undelivered' || state === 'failed' || state === 'suppressed';

/** What the provider's status words mean to us. Words that we do not know change nothing. */
const PROVIDER_STATES: Readonly<Record<string, MessageState>> = {
  accepted: 'sent',
  scheduled: 'sent',
  queued: 'sent',
  sending: 'sent',
  sent: 'sent',
  delivered: 'delivered',
  read: 'delivered',
  partially_delivered: 'undelivered',
  undelivered: 'undelivered',
  failed: 'failed',
  canceled: 'failed',
};

/** `null` for a word that we do not know. */
export const stateOfProviderStatus = (status: string): MessageState | null =>
  PROVIDER_STATES[status.toLowerCase()] ?? null;

/**
 * How far along a state is. Status callbacks come twice, late and out of order; the highest rank
 * wins, so the end is the same in whichever order they came. `delivered` outranks the failures
 * because it is the only one that somebody's phone has vouched for.
 */
const RANK: Readonly<Record<MessageState, number>> = {
  new: 0,
  suppressed: 0,
  sending: 1,
  unknown: 2,
  sent: 3,
  failed: 4,
  undelivered: 5,
  delivered: 6,
};

/** The state after a status callback or a look-up: an older report never overwrites a newer one. */
export function afterProviderStatus(current: MessageState, status: string): MessageState {
  const reported = stateOfProviderStatus(status);
  return reported !== null && RANK[reported] > RANK[current] ? reported : current;
}

/** What is known about a send that did not end in an acceptance. */
export interface SendFailure {
  /** The HTTP status, when an answer came. */
  readonly httpStatus?: number;
  /** The provider's own error number, when the answer carried one. */
  readonly providerCode?: number;
  /** The network's error name, such as ECONNREFUSED. */
  readonly networkCode?: string;
  /** Whether the connection was still being made, so that nothing can have been written. */
  readonly whileConnecting?: boolean;
}

export type SendVerdict =
  /** Not accepted for sure. `retryable`: the same text may be sent again later. */
  | { readonly outcome: 'refused'; readonly retryable: boolean; readonly words: string }
  /** It may have been accepted: ask the provider, never send again by itself. */
  | { readonly outcome: 'unknown'; readonly why: string };

/** Errors of the network that can only happen before anything was written. */
const BEFORE_WRITE: ReadonlySet<string> = new Set([
  'ECONNREFUSED',
  'ENOTFOUND',
  'EAI_AGAIN',
  'EHOSTUNREACH',
  'ENETUNREACH',
]);

/** The provider's numbers that people meet, in plain words. Numbers and meanings are from memory. */
const PROVIDER_WORDS: Readonly<Record<number, string>> = {
  20003: 'The text service did not accept our account or its key.',
  20404: 'The text service does not know our account.',
  20429: 'The text service asks us to slow down.',
  21211: 'The phone number is not one that can get texts.',
  21212: 'Our own sending number is not valid.',
  21408: 'Our account may not text that country.',
  21602: 'The text was empty.',
  21606: 'Our sending number cannot send texts.',
  21609: 'Our address for delivery reports is not valid.',
  21610: 'This phone has opted out of texts.',
  21614: 'The phone number is not a mobile phone.',
  21617: 'The text is longer than the service takes.',
};

/** The provider's word that the phone opted out there; our own record should follow. */
export const OPTED_OUT_CODE = 21610;

/**
 * Sorts a failed send. Only what cannot have been accepted is called refused; whatever is not known
 * to be harmless is unknown.
 */
export function judgeFailure(failure: SendFailure): SendVerdict {
  const { httpStatus, providerCode, networkCode } = failure;
  if (httpStatus !== undefined) {
    if (httpStatus === 429) {
      return { outcome: 'refused', retryable: true, words: words(20429, httpStatus) };
    }
    // 408 says that the server gave up waiting for us, not that it did nothing.
    if (httpStatus >= 400 && httpStatus < 500 && httpStatus !== 408) {
      return { outcome: 'refused', retryable: false, words: words(providerCode, httpStatus) };
    }
    return { outcome: 'unknown', why: `The text service answered ${httpStatus}.` };
  }
  if (networkCode !== undefined && (failure.whileConnecting || BEFORE_WRITE.has(networkCode))) {
    return {
      outcome: 'refused',
      retryable: true,
      words: `The text service could not be reached (${networkCode}).`,
    };
  }
  return {
    outcome: 'unknown',
    why: networkCode
      ? `The connection broke after the text was handed over (${networkCode}).`
      : 'The answer of the text service could not be read.',
  };
}

const words = (providerCode: number | undefined, httpStatus: number): string =>
  (providerCode === undefined ? undefined : PROVIDER_WORDS[providerCode]) ??
  `The text service refused the text (${providerCode ?? `HTTP ${httpStatus}`}).`;

/** Tries before a text that is refused again and again is given up and shown: our choice. */
export const MAX_SEND_ATTEMPTS = 8;

/**
 * How long to wait before the next try: full jitter over a doubling ceiling, from 2 s to 5 min.
 *
 * @param attempt tries so far, from 1
 * @param roll a number from 0 up to, not including, 1
 * @returns milliseconds, or `null` when it is time to give up
 */
export function retryDelayMs(attempt: number, roll: number): number | null {
  if (attempt >= MAX_SEND_ATTEMPTS) return null;
  const ceilingMs = Math.min(2_000 * 2 ** (attempt - 1), 300_000);
  // Never at once: a service that has just said "slow down" gets a quarter of the ceiling.
  return Math.round(ceilingMs * (0.25 + 0.75 * roll));
}
