import { timingSafeEqual } from 'node:crypto';

import express, { type Request, type Response, Router } from 'express';

import type { Deliveries } from './fake-deliveries';
import type { FaultQueue, SendFault } from './fake-faults';
import type { Journal } from './fake-journal';
import { type FakeMessages, toResource } from './fake-messages';

export interface FakeAccount {
  readonly accountSid: string;
  readonly authToken: string;
  /** The only number that the account may send from; any E.164 number when left out. */
  readonly number?: string;
}

export interface FakeApi {
  readonly account: FakeAccount;
  readonly messages: FakeMessages;
  readonly journal: Journal;
  readonly faults: FaultQueue;
  readonly deliveries: Deliveries;
  /** How long a slow answer takes. */
  readonly slowMs: number;
  /** Phones that the service itself refuses to text, as after an opt-out that it handles. */
  readonly blockedPhones: ReadonlySet<string>;
}

/** The real service's limit on one body. */
const MAX_BODY_CHARACTERS = 1_600;
const MAX_PAGE_SIZE = 1_000;

/**
 * The message part of the hosted text service's HTTP API, as far as a sender of texts needs it.
 * Paths and fields are those that the SDK uses; the error numbers are from memory.
 */
export function fakeMessagesApi(api: FakeApi): Router {
  const routes = Router();
  routes.use(express.urlencoded({ extended: false, limit: '64kb' }));
  routes.use('/Accounts/:accountSid', (req, res, next) => {
    if (!isAuthorised(req, api.account)) {
      res.setHeader('WWW-Authenticate', 'Basic realm="Text service"');
      return refuse(res, 401, 20003, 'Authenticate');
    }
    if (req.params.accountSid !== api.account.accountSid) return notFound(req, res);
    next();
  });

  routes.post('/Accounts/:accountSid/Messages.json', (req, res) => send(api, req, res));

  routes.get('/Accounts/:accountSid/Messages.json', (req, res) => {
    const fault = api.faults.nextList();
    if (fault === 'timeout') return;
    if (fault === '500') return refuse(res, 500, 20500, 'Internal Server Error');
    res.json(listPage(api, req, fault === 'empty'));
  });

  routes.get('/Accounts/:accountSid/Messages/:name', (req, res) => {
    const message = api.messages.get(req.params.name.replace(/\.json$/, ''));
    if (!message) return notFound(req, res);
    res.json(toResource(message, api.account.accountSid));
  });

  routes.use(notFound);
  return routes;
}

function send(api: FakeApi, req: Request, res: Response): void {
  const sent = {
    to: field(req.body, 'To'),
    from: field(req.body, 'From'),
    body: field(req.body, 'Body'),
    statusCallback: field(req.body, 'StatusCallback') || null,
  };
  const outbox = outboxOf(sent.statusCallback);

  const fault = api.faults.nextSend();
  if (fault !== 'none') api.journal.append({ kind: 'fault', fault, to: sent.to, outbox });
  if (failBeforeAccept(fault, res)) return;

  const wrong = whatIsWrong(sent, api);
  if (wrong) {
    const { httpStatus, code, words } = wrong;
    api.journal.append({ kind: 'refused', httpStatus, code, to: sent.to, outbox });
    return refuse(res, httpStatus, code, words);
  }

  const message = api.messages.accept({ ...sent, outbox });
  api.deliveries.begin(message);
  const answer = (): void => {
    res.status(201).json(toResource(message, api.account.accountSid));
  };
  if (fault === 'slow') setTimeout(answer, api.slowMs).unref();
  else if (!failAfterAccept(fault, res)) answer();
}

/** Whether the fault has ended the exchange, with nothing accepted. */
function failBeforeAccept(fault: SendFault, res: Response): boolean {
  if (fault === '429') refuse(res, 429, 20429, 'Too Many Requests');
  else if (fault === '500') refuse(res, 500, 20500, 'Internal Server Error');
  else if (fault === 'reset') res.socket?.resetAndDestroy();
  // A timeout is answered by nothing at all; the sender has to give up.
  return fault === '429' || fault === '500' || fault === 'reset' || fault === 'timeout';
}

/** Whether the fault has swallowed the answer to a text that was accepted. */
function failAfterAccept(fault: SendFault, res: Response): boolean {
  if (fault === '500-after-accept') refuse(res, 500, 20500, 'Internal Server Error');
  else if (fault === 'reset-after-accept') res.socket?.resetAndDestroy();
  else if (fault === 'wrong-json') res.status(201).type('json').send('{"sid": "SM');
  else return fault === 'timeout-after-accept';
  return true;
}

interface Wrong {
  readonly httpStatus: number;
  readonly code: number;
  readonly words: string;
}

/** ITU-T E.164: a plus sign and at most fifteen digits. For +1 the number is ten digits long. */
const E164 = /^\+(?:1[2-9]\d{9}|[2-9]\d{6,14})$/;

function whatIsWrong(
  sent: { to: string; from: string; body: string; statusCallback: string | null },
  { account, blockedPhones }: FakeApi,
): Wrong | null {
  const bad = (code: number, words: string): Wrong => ({ httpStatus: 400, code, words });
  if (sent.to === '') return bad(21604, "A 'To' phone number is required.");
  if (!E164.test(sent.to)) return bad(21211, `Invalid 'To' Phone Number: ${sent.to}`);
  if (sent.from === '') return bad(21603, "A 'From' phone number is required.");
  if (!E164.test(sent.from)) return bad(21212, `Invalid 'From' Phone Number: ${sent.from}`);
  if (account.number !== undefined && sent.from !== account.number) {
    return bad(21606, `The 'From' number ${sent.from} is not one of this account.`);
  }
  if (sent.to === sent.from) return bad(21266, "'To' and 'From' number cannot be the same");
  if (sent.body.trim() === '') return bad(21602, 'Message body is required.');
  if ([...sent.body].length > MAX_BODY_CHARACTERS) {
    return bad(21617, `The message body exceeds the ${MAX_BODY_CHARACTERS} character limit.`);
  }
  if (sent.statusCallback !== null && !isWebAddress(sent.statusCallback)) {
    return bad(21609, `The 'StatusCallback' URL ${sent.statusCallback} is not a valid URL.`);
  }
  if (blockedPhones.has(sent.to)) {
    return bad(21610, 'Attempt to send to unsubscribed recipient');
  }
  return null;
}

function listPage(api: FakeApi, req: Request, isEmpty: boolean): Record<string, unknown> {
  const asked = (name: string): string => field(req.query, name);
  const sentAfter = Date.parse(asked('DateSent>'));
  const sentBefore = Date.parse(asked('DateSent<'));
  const found = api.messages
    .all()
    .filter((message) => asked('To') === '' || message.to === asked('To'))
    .filter((message) => asked('From') === '' || message.from === asked('From'))
    .filter(({ sentAt }) => Number.isNaN(sentAfter) || (sentAt ?? -Infinity) >= sentAfter)
    .filter(({ sentAt }) => Number.isNaN(sentBefore) || (sentAt ?? Infinity) <= sentBefore)
    .reverse();

  const pageSize = Math.min(Math.max(Number(asked('PageSize')) || 50, 1), MAX_PAGE_SIZE);
  const page = Math.max(Number(asked('Page')) || 0, 0);
  const start = page * pageSize;
  const shown = isEmpty ? [] : found.slice(start, start + pageSize);
  const uriOf = (number: number): string => {
    const query = new URLSearchParams(req.originalUrl.split('?')[1] ?? '');
    query.set('Page', String(number));
    query.set('PageSize', String(pageSize));
    return `/2010-04-01/Accounts/${api.account.accountSid}/Messages.json?${query.toString()}`;
  };
  return {
    messages: shown.map((message) => toResource(message, api.account.accountSid)),
    page,
    page_size: pageSize,
    start,
    end: start + Math.max(shown.length - 1, 0),
    uri: uriOf(page),
    first_page_uri: uriOf(0),
    next_page_uri: !isEmpty && start + pageSize < found.length ? uriOf(page + 1) : null,
    previous_page_uri: page > 0 ? uriOf(page - 1) : null,
  };
}

function isAuthorised(req: Request, account: FakeAccount): boolean {
  const given = Buffer.from(req.headers.authorization ?? '');
  const pair = Buffer.from(`${account.accountSid}:${account.authToken}`).toString('base64');
  const wanted = Buffer.from(`Basic ${pair}`);
  return given.length === wanted.length && timingSafeEqual(given, wanted);
}

function refuse(res: Response, status: number, code: number, message: string): void {
  const more_info = `https://example.com/errors/${code}`;
  res.status(status).json({ code, message, more_info, status });
}

function notFound(req: Request, res: Response): void {
  refuse(res, 404, 20404, `The requested resource ${req.originalUrl} was not found`);
}

/** One field of a form or query; a missing or repeated one is empty. */
export function field(from: unknown, name: string): string {
  const value =
    typeof from === 'object' && from !== null ? (from as Record<string, unknown>)[name] : undefined;
  return typeof value === 'string' ? value : '';
}

const isWebAddress = (text: string): boolean =>
  URL.canParse(text) && /^https?:$/.test(new URL(text).protocol);

function outboxOf(statusCallback: string | null): string | null {
  if (statusCallback === null || !URL.canParse(statusCallback)) return null;
  return new URL(statusCallback).searchParams.get('outbox');
}
