/** The phone check as this browser knows it: answers that may not be sent yet, and running timers. */
export interface CheckDraft {
  readonly answers: Readonly<Record<string, string | number>>;
  /** When the timer of a question was started, by the question's id. */
  readonly timers: Readonly<Record<string, number>>;
  /** Whether the server has these answers. */
  readonly isSent: boolean;
}

export const EMPTY_CHECK: CheckDraft = { answers: {}, timers: {}, isSent: true };

export const checkKey = (callId: string): string => `phone-check:${callId}`;

/** Whether something read from storage is a draft of this program. */
export function isCheckDraft(value: unknown): value is CheckDraft {
  if (typeof value !== 'object' || value === null) return false;
  const { answers, timers, isSent } = value as Partial<Record<keyof CheckDraft, unknown>>;
  return (
    isRecord(answers, (one) => typeof one === 'string' || typeof one === 'number') &&
    isRecord(timers, (one) => typeof one === 'number') &&
    typeof isSent === 'boolean'
  );
}

const isRecord = (value: unknown, fits: (one: unknown) => boolean): boolean =>
  typeof value === 'object' && value !== null && Object.values(value).every(fits);

/** "4:05"; a timer that has run out reads "0:00". */
export function timerWords(leftMs: number): string {
  const seconds = Math.max(0, Math.ceil(leftMs / 1000));
  return `${Math.floor(seconds / 60)}:${String(seconds % 60).padStart(2, '0')}`;
}
