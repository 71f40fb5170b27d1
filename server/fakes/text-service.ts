import { once } from 'node:events';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';

import express, { type Express } from 'express';
import { z } from 'zod';

import { fakeMessagesApi, field } from './fake-api';
import { deliveries, isUnfinished } from './fake-deliveries';
import { type FaultOrder, FaultPlan, FaultQueue } from './fake-faults';
import { type JournalEntry, openJournal } from './fake-journal';
import { FakeMessages } from './fake-messages';
import { fakePage, PAGE_POLICY, threadsPage } from './fake-page';
import { webhookPoster } from './fake-webhooks';

export interface FakeTextsOptions {
  /** 0 takes a free port. Only this machine can reach it. */
  readonly port: number;
  readonly accountSid: string;
  readonly authToken: string;
  /** The append-only file; a fake that is started again goes on where the last one stopped. */
  readonly journalPath: string;
  /** Where texts from phones are posted to, exactly as the product knows its own address. */
  readonly inboundUrl: string;
  /** The account's own number, E.164. When left out any number may send. */
  readonly number?: string;
  /** How long a text takes from queued to sent, and from sent to its end. */
  readonly stepMs?: number;
  readonly slowMs?: number;
  /** Waits before a webhook that was not answered, or with 5xx, is posted again. */
  readonly webhookRetryMs?: readonly number[];
}

export interface FakeTexts {
  readonly url: string;
  close(): Promise<void>;
  journal(): readonly JournalEntry[];
  setFaults(order: FaultOrder): void;
  /** The service itself refuses these phones from now on (error 21610). */
  block(phones: readonly string[]): void;
  /** Sends a text as a phone would; resolves with what the product answered, copy by copy. */
  inbound(text: InboundOrder): Promise<readonly (number | null)[]>;
}

export interface InboundOrder {
  /** E.164. */
  readonly from: string;
  readonly body: string;
  /** How often the very same webhook is posted. */
  readonly copies?: number;
}

const DEFAULT_NUMBER = '+15555550100';

const InboundRequest = z.strictObject({
  from: z.string().regex(/^\+\d{7,15}$/),
  body: z.string().max(1_600),
  copies: z.int().min(1).max(20).default(1),
});

/**
 * Starts a local stand-in for the hosted text service. It takes texts as the SDK sends them, tells
 * the product what became of them by signed callbacks, and lets a person or a test answer as the
 * customer. It does not handle opt-outs by itself, so that it never hides a text which the product
 * should not have sent.
 */
export async function startFakeTexts(options: FakeTextsOptions): Promise<FakeTexts> {
  const { accountSid, authToken } = options;
  const journal = openJournal(options.journalPath);
  const messages = new FakeMessages(journal);
  const faults = new FaultQueue();
  const blockedPhones = new Set<string>();
  const webhooks = webhookPoster(
    authToken,
    journal,
    options.webhookRetryMs ?? [500, 2_000, 5_000, 15_000],
  );
  const progress = deliveries(messages, faults, webhooks, accountSid, options.stepMs ?? 400);

  const inbound: FakeTexts['inbound'] = async ({ from, body, copies = 1 }) => {
    const { sid, to } = messages.receive({ from, to: options.number ?? DEFAULT_NUMBER, body });
    const fields = {
      AccountSid: accountSid,
      ApiVersion: '2010-04-01',
      MessageSid: sid,
      SmsSid: sid,
      SmsMessageSid: sid,
      SmsStatus: 'received',
      From: from,
      To: to,
      Body: body,
      NumMedia: '0',
      NumSegments: '1',
    };
    const webhook = { sid, url: options.inboundUrl, reported: null, fields };
    return Promise.all(Array.from({ length: copies }, () => webhooks.post(webhook)));
  };

  const app = express();
  app.disable('x-powered-by');
  app.use(
    '/2010-04-01',
    fakeMessagesApi({
      account: { accountSid, authToken, number: options.number },
      messages,
      journal,
      faults,
      deliveries: progress,
      slowMs: options.slowMs ?? 1_000,
      blockedPhones,
    }),
  );
  servePages(app, messages, inbound);
  const fake = {
    journal: () => journal.entries(),
    setFaults: (order: FaultOrder) => faults.set(order),
    block: (phones: readonly string[]) => phones.forEach((phone) => blockedPhones.add(phone)),
    inbound,
  };
  serveControls(app, fake);

  const server = createServer(app);
  server.listen(options.port, '127.0.0.1');
  await once(server, 'listening');
  messages.all().filter(isUnfinished).forEach(progress.begin);

  return {
    ...fake,
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
    close: async () => {
      progress.close();
      webhooks.close();
      const closed = once(server, 'close');
      server.close();
      // Answers that a fault holds back would otherwise keep the server open.
      server.closeAllConnections();
      await closed;
    },
  };
}

function servePages(app: Express, messages: FakeMessages, inbound: FakeTexts['inbound']): void {
  app.use(['/', '/threads', '/inbound'], (_req, res, next) => {
    res.setHeader('Content-Security-Policy', PAGE_POLICY);
    next();
  });
  app.get('/', (_req, res) => void res.send(fakePage(messages.all())));
  app.get('/threads', (_req, res) => void res.send(threadsPage(messages.all())));
  app.post('/inbound', express.urlencoded({ extended: false }), (req, res) => {
    const asked = InboundRequest.safeParse({
      from: field(req.body, 'from').replace(/[\s()-]/g, ''),
      body: field(req.body, 'body'),
    });
    if (!asked.success) return void res.status(422).type('text').send('Not a phone or too long.');
    // The product may be down and the retries take a while; the page need not wait for them.
    void inbound(asked.data);
    res.redirect(303, '/');
  });
}

/** For tests and scripts that run the fake in a process of its own. */
function serveControls(app: Express, fake: Omit<FakeTexts, 'url' | 'close'>): void {
  app.use('/_control', express.json({ limit: '1mb' }));
  app.get('/_control/journal', (_req, res) => void res.json(fake.journal()));
  app.post('/_control/faults', (req, res) => {
    const order = FaultPlan.safeParse(req.body);
    if (!order.success) return void res.status(422).json(order.error.issues);
    fake.setFaults(order.data);
    res.status(204).end();
  });
  app.post('/_control/block', (req, res) => {
    const phones = z.array(z.string()).safeParse(req.body);
    if (!phones.success) return void res.status(422).json(phones.error.issues);
    fake.block(phones.data);
    res.status(204).end();
  });
  app.post('/_control/inbound', async (req, res) => {
    const asked = InboundRequest.safeParse(req.body);
    if (!asked.success) return void res.status(422).json(asked.error.issues);
    res.json({ answers: await fake.inbound(asked.data) });
  });
}
