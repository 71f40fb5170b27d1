import { createHmac, timingSafeEqual } from 'node:crypto';
import type { Request, RequestHandler, Response } from 'express';
import helmet from 'helmet';
import { Refusal } from '@shared/domain/errors';
import type { Config } from '../config';

const TOKEN_COOKIE = 'XSRF-TOKEN';
const TOKEN_HEADER = 'x-xsrf-token';

/**
 * Headers for every answer. Scripts come from here alone. Component styles are inserted by the
 * framework at run time, so styles need 'unsafe-inline'; a nonce would not survive an offline
 * copy of the page.
 */
export const securityHeaders = (config: Config): RequestHandler =>
  helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: ["'none'"],
        scriptSrc: ["'self'"],
        styleSrc: ["'self'", "'unsafe-inline'"],
        fontSrc: ["'self'"],
        imgSrc: ["'self'", 'data:', 'blob:'],
        connectSrc: ["'self'"],
        workerSrc: ["'self'"],
        manifestSrc: ["'self'"],
        formAction: ["'self'"],
        frameAncestors: ["'none'"],
        baseUri: ["'self'"],
      },
    },
    strictTransportSecurity: config.http.publicUrl.startsWith('https:'),
    referrerPolicy: { policy: 'no-referrer' },
    xFrameOptions: { action: 'deny' },
  });

/** Whether a browser's Origin is this application. */
export function ownOrigins(config: Config): (origin: string | undefined) => boolean {
  const own = new Set([new URL(config.http.publicUrl).origin]);
  // The same machine by its other names, for those who run it for themselves.
  if (config.environment !== 'production' || isLoopback(config.http.publicUrl))
    for (const host of ['localhost', '127.0.0.1'])
      own.add(`http://${host}:${String(config.http.port)}`);
  return (origin) => origin !== undefined && own.has(origin);
}

const isLoopback = (url: string): boolean =>
  ['localhost', '127.0.0.1'].includes(new URL(url).hostname);

/**
 * Refuses a change that another site made a browser send: the Origin must be ours, and whoever is
 * signed in must echo a token that only our own pages can read.
 */
export function refuseForeignChanges(
  config: Config,
  isOwnOrigin: (origin: string | undefined) => boolean,
): RequestHandler {
  return (request, _response, next) => {
    if (['GET', 'HEAD', 'OPTIONS'].includes(request.method)) return next();
    if (!isOwnOrigin(request.headers.origin))
      throw new Refusal('foreign-origin', 'Changes are taken from this site only.');
    const type = request.headers['content-type'];
    if (type !== undefined && !/^application\/(json|octet-stream)\b/.test(type))
      throw new Refusal('foreign-origin', 'Changes are sent as JSON.');
    // Nobody is signed in yet: there is no right that a foreign site could borrow.
    if (!request.isAuthenticated()) return next();
    if (!same(request.get(TOKEN_HEADER) ?? '', tokenFor(config, request.sessionID)))
      throw new Refusal('foreign-origin', 'Reload the page and try again.');
    next();
  };
}

/** Lets our own page read the token of its session. */
export function giveToken(config: Config, request: Request, response: Response): void {
  response.cookie(TOKEN_COOKIE, tokenFor(config, request.sessionID), {
    httpOnly: false,
    sameSite: 'lax',
    secure: config.http.publicUrl.startsWith('https:'),
    path: '/',
  });
}

export function takeTokenBack(response: Response): void {
  response.clearCookie(TOKEN_COOKIE, { path: '/' });
}

/** Made from the session's id, so that nothing need be written into the session. */
const tokenFor = (config: Config, sessionId: string): string =>
  createHmac('sha256', config.sessionSecret).update(`xsrf ${sessionId}`).digest('base64url');

function same(sent: string, expected: string): boolean {
  const [a, b] = [Buffer.from(sent), Buffer.from(expected)];
  return a.length === b.length && timingSafeEqual(a, b);
}
