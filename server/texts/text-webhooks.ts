import express, { Router, type RequestHandler } from 'express';
import twilio from 'twilio';
import { z } from 'zod';
import { Refusal } from '@shared/domain/errors';
import type { Context } from '../context';
import { InvalidRequest } from '../http/problem';
import { takeInbound } from './take-inbound';
import { takeReport } from './take-report';

/** The service waits longer, but whoever has not been answered by then gets a "try again". */
const ANSWER_WITHIN_MS = 900;

const Sid = z.string().regex(/^(?:SM|MM)[0-9a-f]{32}$/);
const StatusReport = z.object({
  MessageSid: Sid,
  MessageStatus: z.string().min(1).max(20),
  ErrorCode: z.string().max(12).optional(),
});
const InboundText = z.object({
  MessageSid: Sid,
  From: z.string().min(1).max(16),
  Body: z.string().max(10_000).default(''),
});
const Outbox = z.object({ outbox: z.uuid().optional() });

/**
 * What the text service tells us: what became of a text, and what customers write back. The
 * signature holds no time, so that the same call may come for ever; everything here is written so
 * that a repeat changes nothing.
 */
export function textWebhooks(context: Context): Router {
  const routes = Router();
  routes.use(answerInTime);
  routes.use(express.urlencoded({ extended: false, limit: '64kb' }));
  routes.use(signedByService(context));

  routes.post('/status', async (request, response) => {
    const { MessageSid, MessageStatus, ErrorCode } = read(StatusReport, request.body);
    const { outbox } = read(Outbox, request.query);
    await takeReport(context, {
      sid: MessageSid,
      status: MessageStatus,
      errorCode: ErrorCode ?? null,
      outboxId: outbox ?? null,
    });
    if (!response.headersSent) response.status(204).end();
  });

  routes.post('/inbound', async (request, response) => {
    const { MessageSid, From, Body } = read(InboundText, request.body);
    await takeInbound(context, { sid: MessageSid, from: From, body: Body });
    // Answers go through the outbox, so this one says nothing.
    if (!response.headersSent) response.type('text/xml').send('<Response></Response>');
  });
  return routes;
}

/**
 * The signature covers the address as the service knows it, which behind a proxy is not the one
 * that arrives here.
 */
function signedByService({ config, log }: Context): RequestHandler {
  return (request, _response, next) => {
    const signature = request.get('X-Twilio-Signature') ?? '';
    const url = `${config.http.publicUrl}${request.originalUrl}`;
    const fields = (request.body ?? {}) as Record<string, unknown>;
    // Compares in constant time.
    if (signature !== '' && twilio.validateRequest(config.texts.token, signature, url, fields))
      return next();
    log.warn({ path: request.path }, 'a webhook with a wrong signature was refused');
    throw new Refusal('not-allowed', 'The signature does not fit.');
  };
}

/** The work may still end well afterwards; the repeat that this asks for then changes nothing. */
const answerInTime: RequestHandler = (_request, response, next) => {
  const timer = setTimeout(() => {
    if (!response.headersSent) next(new Refusal('busy', 'Not in time; send it again.'));
  }, ANSWER_WITHIN_MS);
  response.once('close', () => clearTimeout(timer));
  next();
};

function read<S extends z.ZodType>(schema: S, sent: unknown): z.output<S> {
  const result = schema.safeParse(sent);
  if (!result.success) throw new InvalidRequest(result.error.issues);
  return result.data;
}
