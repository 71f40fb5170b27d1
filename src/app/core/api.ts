import {
  HttpClient,
  HttpErrorResponse,
  HttpEventType,
  HttpHeaders,
  type HttpResponse,
} from '@angular/common/http';
import { inject, Injectable } from '@angular/core';
import type { ParamsOf, ReplyOf, SentBodyOf, SentQueryOf } from '@shared/contract/http';
import { PATHS, type RouteName } from '@shared/contract/paths';
import type { Problem } from '@shared/contract/problem';
import {
  filter,
  firstValueFrom,
  fromEvent,
  NEVER,
  type Observable,
  Subject,
  takeUntil,
  tap,
  timeout,
  TimeoutError,
} from 'rxjs';
import { ProblemError } from './problem-error';

type Part<Name extends string, T> = undefined extends T
  ? { readonly [N in Name]?: undefined }
  : { readonly [N in Name]: T };

/** What a route needs to be called: path parameters, query and body, as the contract says. */
export type CallArgs<K extends RouteName> = Part<
  'params',
  keyof ParamsOf<K> extends never ? undefined : ParamsOf<K>
> &
  Part<'query', SentQueryOf<K>> &
  Part<'body', SentBodyOf<K>>;

type ArgsList<K extends RouteName> =
  Record<never, never> extends CallArgs<K> ? [args?: CallArgs<K>] : [args: CallArgs<K>];

/** Longest wait for an answer; a change that comes later is found by its command id. */
const ANSWER_WITHIN_MS = 60_000;

/**
 * The only way to the server, typed by the contract. A refusal or a lost connection rejects with
 * `ProblemError`; no other error comes out.
 */
@Injectable({ providedIn: 'root' })
export class Api {
  private readonly http = inject(HttpClient);

  /** The server no longer knows this session. */
  readonly sessionLost = new Subject<void>();

  call<K extends RouteName>(name: K, ...[args]: ArgsList<K>): Promise<ReplyOf<K>> {
    return this.send(name, args, NEVER);
  }

  /**
   * As `call`, of an answer that may no longer be wanted.
   *
   * @param stop closes the line; the promise then rejects with a `DOMException`
   */
  async callUntil<K extends RouteName>(
    stop: AbortSignal,
    name: K,
    ...[args]: ArgsList<K>
  ): Promise<ReplyOf<K>> {
    try {
      return await this.send(name, args, fromEvent(stop, 'abort'));
    } catch (error) {
      if (stop.aborted) throw new DOMException('The question was taken back.', 'AbortError');
      throw error;
    }
  }

  private async send<K extends RouteName>(
    name: K,
    args: CallArgs<K> | undefined,
    stopped: Observable<unknown>,
  ): Promise<ReplyOf<K>> {
    const [method, path] = PATHS[name];
    const parts: {
      readonly params?: Readonly<Record<string, string>> | undefined;
      readonly query?: unknown;
      readonly body?: unknown;
    } = args ?? {};

    try {
      const reply = await firstValueFrom(
        this.http
          .request<ReplyOf<K>>(method, urlOf(path, parts.params ?? {}, parts.query), {
            body: parts.body,
            headers: headersFor(parts.body),
            observe: 'response',
          })
          .pipe(timeout(ANSWER_WITHIN_MS), takeUntil(stopped)),
      );
      return bodyOf(reply);
    } catch (error) {
      throw this.problemOf(error);
    }
  }

  /**
   * Sends a large file, however long that takes.
   *
   * @param onProgress is told the share that has been sent, 0 to 1
   * @param stop ends it; the promise then rejects with a `DOMException`
   */
  async upload(
    name: 'uploadRegionFile',
    args: CallArgs<'uploadRegionFile'>,
    onProgress: (share: number) => void,
    stop: AbortSignal,
  ): Promise<ReplyOf<'uploadRegionFile'>> {
    const [method, path] = PATHS[name];
    const sending = this.http
      .request<ReplyOf<'uploadRegionFile'>>(method, urlOf(path, {}, args.query), {
        body: args.body,
        headers: headersFor(args.body),
        observe: 'events',
        reportProgress: true,
      })
      .pipe(
        tap((event) => {
          if (event.type === HttpEventType.UploadProgress && event.total)
            onProgress(event.loaded / event.total);
        }),
        filter((event) => event.type === HttpEventType.Response),
        takeUntil(fromEvent(stop, 'abort')),
      );
    try {
      return bodyOf(await firstValueFrom(sending));
    } catch (error) {
      if (stop.aborted) throw new DOMException('The sending was stopped.', 'AbortError');
      throw this.problemOf(error);
    }
  }

  private problemOf(error: unknown): ProblemError {
    const problem = toProblemError(error);
    if (problem.code === 'not-signed-in') this.sessionLost.next();
    return problem;
  }
}

/** An id for a new row or command; made here, so that a repeat of the request changes nothing. */
export const newId = (): string => crypto.randomUUID();

/** The address of a route, for links such as a CSV download. */
export function urlOf(
  path: string,
  params: Readonly<Record<string, string>>,
  query: unknown,
): string {
  const filled = path.replace(/:(\w+)/g, (_, name: string) => {
    const value = params[name];
    if (value === undefined) throw new Error(`${path} needs ${name}`);
    return encodeURIComponent(value);
  });
  const search = new URLSearchParams();
  for (const [name, value] of Object.entries(query ?? {})) {
    if (value !== undefined && value !== null) search.set(name, String(value));
  }
  return search.size > 0 ? `${filled}?${search}` : filled;
}

function headersFor(body: unknown): HttpHeaders {
  return body instanceof ArrayBuffer || body instanceof Blob
    ? new HttpHeaders({ 'Content-Type': 'application/octet-stream' })
    : new HttpHeaders();
}

function bodyOf<T>(reply: HttpResponse<T>): T {
  // Every route of the contract answers with JSON; an empty answer comes from something in between.
  if (reply.body === null) throw new ProblemError(UNREADABLE);
  return reply.body;
}

const NO_CONNECTION: Problem = {
  type: '/problems/no-connection',
  title: 'No connection to the server',
  detail: 'No connection to the server. Nothing has been lost; try again in a moment.',
  status: 0,
};
const UNREADABLE: Problem = {
  type: '/problems/internal',
  title: 'The server gave an answer that cannot be read',
  status: 500,
};

function toProblemError(error: unknown): ProblemError {
  if (error instanceof ProblemError) return error;
  if (error instanceof TimeoutError) return new ProblemError(NO_CONNECTION);
  if (!(error instanceof HttpErrorResponse)) throw error;
  if (error.status === 0) return new ProblemError(NO_CONNECTION);
  const sent: unknown = error.error;
  const problem = isProblem(sent) ? sent : { ...UNREADABLE, status: error.status };
  return new ProblemError(problem, secondsIn(error.headers.get('Retry-After')));
}

function isProblem(value: unknown): value is Problem {
  return (
    typeof value === 'object' &&
    value !== null &&
    'type' in value &&
    typeof value.type === 'string' &&
    'title' in value &&
    typeof value.title === 'string'
  );
}

function secondsIn(retryAfter: string | null): number | null {
  const seconds = Number(retryAfter);
  return retryAfter !== null && Number.isFinite(seconds) ? seconds : null;
}
