import express, { Router, type Request, type RequestHandler, type Response } from 'express';
import { z } from 'zod';
import {
  HTTP,
  type BodyOf,
  type ParamsOf,
  type QueryOf,
  type ReplyOf,
  type RouteSpec,
} from '@shared/contract/http';
import { PATHS, type RouteName } from '@shared/contract/paths';
import { Id } from '@shared/contract/common';
import { Refusal } from '@shared/domain/errors';
import type { Context } from '../context';
import type { SignedIn } from '../staff/signed-in';
import { InvalidRequest } from './problem';
import { MOST_PER_MINUTE, type RateLimit } from './rate-limit';

/** What a handler gets: everything checked, everything typed. */
export interface Asked<K extends RouteName> {
  readonly context: Context;
  readonly params: ParamsOf<K>;
  readonly query: QueryOf<K>;
  readonly body: BodyOf<K>;
  /** Whoever asks; only routes for anyone may see `null`, and they use `maybePerson`. */
  readonly person: SignedIn;
  readonly maybePerson: SignedIn | null;
  /** For the few that set a cookie or send a file. A handler that has answered returns nothing. */
  readonly http: { readonly request: Request; readonly response: Response };
}

type Handler<K extends RouteName> = (asked: Asked<K>) => Promise<ReplyOf<K> | undefined>;

/** One handler for every route of the contract: a missing one does not compile. */
export type Handlers = { readonly [K in RouteName]: Handler<K> };
/** A feature's share of the handlers. */
export type SomeHandlers<K extends RouteName> = { readonly [P in K]: Handler<P> };

const MOST_JSON = '256kb';
const MOST_BYTES = '12mb';

/** Puts the contract on the wire: rights first, then shape, then the handler. */
export function bindRoutes(
  context: Context,
  handlers: Handlers,
  personOf: (request: Request) => Promise<SignedIn | null>,
  limit: RateLimit,
): Router {
  const router = Router();
  const parseJson = express.json({ limit: MOST_JSON, strict: true });
  const parseBytes = express.raw({ limit: MOST_BYTES, type: 'application/octet-stream' });

  for (const name of Object.keys(PATHS) as RouteName[]) {
    const [method, path] = PATHS[name];
    const spec: RouteSpec = HTTP[name];
    const verb = method.toLowerCase() as 'get' | 'post' | 'patch' | 'delete';
    const parse = spec.body === 'bytes' ? parseBytes : parseJson;
    const chain: RequestHandler[] = [
      guard(name, spec, personOf, limit),
      // A stream is the handler's own: no parser may hold it.
      ...(spec.body && spec.body !== 'stream' ? [parse] : []),
    ];
    router[verb](path, ...chain, async (request, response) => {
      const person = personFrom(response);
      const asked = {
        context,
        params: read(z.record(z.string(), Id), request.params),
        query: spec.query ? read(spec.query, request.query) : undefined,
        body: bodyOf(spec, request),
        person,
        maybePerson: person,
        http: { request, response },
      };
      // The table's types tie each name to its own shapes; a loop over names cannot show that.
      const handle = handlers[name] as (asked: unknown) => Promise<unknown>;
      const reply = await handle(asked);
      if (response.headersSent) return;
      response.status(spec.status ?? 200).json(checked(context, name, spec, reply));
    });
  }
  return router;
}

/** Rights are checked in one place, before the request is read any further. */
function guard(
  name: RouteName,
  spec: RouteSpec,
  personOf: (request: Request) => Promise<SignedIn | null>,
  limit: RateLimit,
): RequestHandler {
  return async (request, response, next) => {
    const person = await personOf(request);
    response.locals['person'] = person;
    if (spec.who !== 'anyone') {
      if (!person) throw new Refusal('not-signed-in', 'Sign in first.');
      if (!spec.who.includes(person.role))
        throw new Refusal('not-allowed', 'Your role does not allow this.');
    }
    if (person?.mustChangePassword && !spec.beforePasswordChange && spec.who !== 'anyone')
      throw new Refusal(
        'password-change-needed',
        'Replace the password that you were given by one of your own.',
      );
    const most = MOST_PER_MINUTE[name];
    if (person && most !== undefined) limit.count(`${name} ${person.userId}`, most);
    next();
  };
}

const personFrom = (response: Response): SignedIn | null =>
  response.locals['person'] as SignedIn | null;

function bodyOf(spec: RouteSpec, request: Request): unknown {
  if (spec.body === undefined || spec.body === 'stream') return undefined;
  if (spec.body === 'bytes') {
    const bytes: unknown = request.body;
    if (!Buffer.isBuffer(bytes) || bytes.length === 0)
      throw new Refusal('log-not-readable', 'The file is empty, or was not sent as bytes.');
    return bytes;
  }
  return read(spec.body, request.body ?? {});
}

/** Reads what a client sent. Only here is a schema mismatch the client's fault. */
function read<S extends z.ZodType>(schema: S, sent: unknown): z.output<S> {
  const result = schema.safeParse(sent);
  if (!result.success) throw new InvalidRequest(result.error.issues);
  return result.data;
}

/** In tests and development a reply that breaks its own contract is an error of ours. */
function checked(context: Context, name: string, spec: RouteSpec, reply: unknown): unknown {
  if (context.config.environment === 'production') return reply;
  const result = spec.reply.safeParse(reply);
  if (!result.success)
    throw new Error(`${name} broke its contract: ${z.prettifyError(result.error)}`);
  return reply;
}
