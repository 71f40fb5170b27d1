import type { ErrorRequestHandler, Request, Response } from 'express';
import {
  ConnectionAcquireTimeoutError,
  ConnectionError,
  DatabaseError,
  UniqueConstraintError,
} from 'sequelize';
import type { Logger } from 'pino';
import type { z } from 'zod';
import { problemType, type Problem } from '@shared/contract/problem';
import { Refusal, type ProblemCode } from '@shared/domain/errors';
import { isWorthAnotherTry } from '../db/transaction';

/** A request that does not fit the contract. Every fault is named, not only the first. */
export class InvalidRequest extends Error {
  constructor(readonly issues: readonly z.core.$ZodIssue[]) {
    super('The request does not fit.');
    this.name = 'InvalidRequest';
  }
}

/** A code without a line here does not compile. */
const PROBLEMS: Readonly<Record<ProblemCode, { status: number; title: string }>> = {
  'not-found': { status: 404, title: 'Not found' },
  'not-signed-in': { status: 401, title: 'Not signed in' },
  'not-allowed': { status: 403, title: 'Not allowed' },
  'sign-in-failed': { status: 401, title: 'The name or the password is wrong' },
  'too-many-attempts': { status: 429, title: 'Too many attempts' },
  'password-change-needed': { status: 403, title: 'Choose a password of your own first' },
  'password-refused': { status: 422, title: 'That password will not do' },
  'foreign-origin': { status: 403, title: 'The request came from another site' },
  'command-id-reused': { status: 422, title: 'The command id was used before' },
  'stale-version': { status: 409, title: 'It has changed meanwhile' },
  'illegal-transition': { status: 409, title: 'That cannot follow now' },
  'household-has-open-call': { status: 409, title: 'This household has an open call' },
  'claimed-by-another': { status: 409, title: 'Somebody else has this call' },
  'not-claimed': { status: 409, title: 'Claim the call first' },
  'call-not-open': { status: 409, title: 'The call is settled' },
  'already-on-a-route': { status: 409, title: 'The call is on a route already' },
  'technician-busy': { status: 409, title: 'The technician is at another stop' },
  'stop-is-firm': { status: 409, title: 'The technician has accepted this stop' },
  'skill-missing': { status: 409, title: 'The technician lacks a skill' },
  'plan-overtaken': { status: 409, title: 'The routes have changed since this was proposed' },
  'storm-closed': { status: 409, title: 'The storm is closed' },
  'storm-already-open': { status: 409, title: 'A storm is open already' },
  'times-disagree': { status: 422, title: 'The times do not fit together' },
  'outline-crosses-itself': { status: 422, title: 'The outline crosses itself' },
  'storm-road-unfit': { status: 422, title: 'That storm road does not fit' },
  'nothing-to-undo': { status: 409, title: 'Nothing is left to take back' },
  'no-phone': { status: 409, title: 'The call has no phone number' },
  'opted-out': { status: 409, title: 'This number wants no texts' },
  'log-not-readable': { status: 422, title: 'The log cannot be read' },
  'log-busy': { status: 409, title: 'The log is being imported' },
  'region-file-refused': { status: 422, title: 'The file cannot be taken' },
  'region-busy': { status: 409, title: 'A region is being imported or located' },
  'no-room': { status: 507, title: 'The disk is full' },
  'already-used': { status: 409, title: 'It is in use already' },
  busy: { status: 503, title: 'Busy; try again in a moment' },
};

export function toProblem(error: unknown): Problem {
  if (error instanceof Refusal)
    return {
      type: problemType(error.code),
      ...PROBLEMS[error.code],
      detail: error.message,
      ...(error.current === undefined ? {} : { current: error.current }),
    };
  if (error instanceof InvalidRequest)
    return {
      type: '/problems/invalid-request',
      status: 422,
      title: 'The request does not fit',
      errors: error.issues.map((issue) => ({
        pointer: `/${issue.path.map((part) => escaped(String(part))).join('/')}`,
        detail: issue.message,
      })),
    };
  if (isDatabaseAway(error) || isWorthAnotherTry(error))
    return { type: problemType('busy'), ...PROBLEMS.busy };
  const status = statusOfExpress(error);
  if (status !== null)
    return {
      type: 'about:blank',
      status,
      title: status === 413 ? 'The request is too large' : 'The request cannot be read',
    };
  return { type: '/problems/internal', status: 500, title: 'Something went wrong on our side' };
}

/** The one place where a failed request is answered. */
export function problemHandler(log: Logger): ErrorRequestHandler {
  return (error, request, response, next) => {
    if (response.headersSent) return next(error);
    const problem = toProblem(error);
    if (problem.status >= 500) log.error({ err: error as unknown }, 'a request failed');
    if (problem.status === 503) response.set('Retry-After', '2');
    if (error instanceof Refusal && OF_SECURITY.has(error.code))
      log.warn(
        { code: error.code, path: pathOf(request), userId: userIdOf(response) },
        'a request was refused',
      );
    const wait = (error as { retryAfterSeconds?: unknown }).retryAfterSeconds;
    if (typeof wait === 'number') response.set('Retry-After', String(wait));
    response
      .status(problem.status)
      .type('application/problem+json')
      .send(JSON.stringify({ ...problem, instance: pathOf(request) }));
  };
}

/** Refusals that somebody who looks for an attack wants to find: who, where, when (ASVS 5.0, 16.3). */
const OF_SECURITY: ReadonlySet<ProblemCode> = new Set([
  'not-allowed',
  'foreign-origin',
  'sign-in-failed',
  'too-many-attempts',
]);

const pathOf = (request: Request): string => request.originalUrl.split('?')[0] ?? '';

const userIdOf = (response: Response): string | null =>
  (response.locals['person'] as { userId: string } | null | undefined)?.userId ?? null;

/** RFC 6901, section 3. */
const escaped = (part: string): string => part.replace(/~/g, '~0').replace(/\//g, '~1');

const LOST_CONNECTION = new Set([
  'ER_SOCKET_UNEXPECTED_CLOSE',
  'ER_CMD_CONNECTION_CLOSED',
  'ER_SERVER_SHUTDOWN',
  'ER_CONNECTION_KILLED',
  'ECONNRESET',
  'ECONNREFUSED',
  'EPIPE',
]);

function isDatabaseAway(error: unknown): boolean {
  if (error instanceof ConnectionError || error instanceof ConnectionAcquireTimeoutError)
    return true;
  const code = (error as { parent?: { code?: unknown } } | null)?.parent?.code;
  return (
    error instanceof DatabaseError &&
    !(error instanceof UniqueConstraintError) &&
    LOST_CONNECTION.has(String(code))
  );
}

/** Express refuses bodies that are malformed or too large by itself. */
function statusOfExpress(error: unknown): number | null {
  const { status, expose } = (error ?? {}) as { status?: unknown; expose?: unknown };
  return typeof status === 'number' && expose === true && status >= 400 && status < 500
    ? status
    : null;
}
