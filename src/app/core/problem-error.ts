import type { Problem } from '@shared/contract/problem';
import type { ProblemCode } from '@shared/domain/errors';

/** What the client can meet: the refusals of the business, and three of the way there. */
export type ClientProblemCode = ProblemCode | 'invalid-request' | 'internal' | 'no-connection';

/** The server said no, or could not be reached. `message` is fit to be shown as it is. */
export class ProblemError extends Error {
  readonly code: ClientProblemCode;
  /** The row as it is now, for whoever acted on an older one; else `undefined`. */
  readonly current: unknown;
  /** What was wrong, by JSON pointer into the body (RFC 6901), such as `/address/text`. */
  readonly fieldErrors: ReadonlyMap<string, string>;

  constructor(
    readonly problem: Problem,
    /** Seconds to wait before the next attempt, when the server asked for it. */
    readonly retryAfterSeconds: number | null = null,
  ) {
    super(problem.detail ?? problem.title);
    this.name = 'ProblemError';
    // The code is a closed union on the server; an unknown one is treated by callers as any other.
    this.code = problem.type.replace(/^\/problems\//, '') as ClientProblemCode;
    this.current = problem.current;
    this.fieldErrors = new Map((problem.errors ?? []).map((e) => [e.pointer, e.detail]));
  }
}

/** What to tell the person who asked, whatever went wrong. */
export function problemWords(error: unknown): string {
  return error instanceof ProblemError ? error.message : 'Something went wrong in this page.';
}
