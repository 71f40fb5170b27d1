import { randomUUID } from 'node:crypto';
import { once } from 'node:events';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer, request as forward } from 'node:http';
import type { AddressInfo } from 'node:net';
import os from 'node:os';
import path from 'node:path';
import type { CallDetail } from '@shared/contract/calls';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import type { GivenContext } from '../../server/app';
import type { JournalEntry } from '../../server/fakes/fake-journal';
import { type FakeTexts, startFakeTexts } from '../../server/fakes/text-service';
import { webhookSignature } from '../../server/fakes/fake-webhooks';
import { StopRecord } from '../../server/routes/stop-record';
import { TechnicianRecord } from '../../server/technicians/technician-record';
import type { TextSender } from '../../server/texts/send-text';
import { MessageRecord } from '../../server/texts/message-record';
import { type Outbox, type OutboxOptions, startOutbox } from '../../server/texts/outbox';
import { aCall } from './calls';
import { startServer, type TestServer } from './server';
import { ACCOUNT, OURS, textSender, TOKEN } from './texts-sender';

/** 2026-10-02 14:00 in New York, inside the hours for texts. */
export const AFTERNOON: Instant = Date.UTC(2026, 9, 2, 18);

export interface TextLab {
  readonly server: TestServer;
  readonly fake: FakeTexts;
  /** Where the world reaches the product: the address behind a proxy is another one. */
  readonly publicUrl: string;
  /** Sets the product's clock, which then runs. */
  setNow(now: Instant): void;
  /** How far the product's clock is ahead of this machine's, milliseconds. */
  clockOffsetMs(): number;
  /** Empties everything but the journal, with the clock in the afternoon and no faults. */
  reset(): Promise<void>;
  /** Starts a worker of the outbox in this process; `wake` of the server reaches the newest. */
  work(options?: OutboxOptions): Outbox;
  sender(timeoutMs?: number): TextSender;
  /** What the service took since the last reset, oldest first. */
  accepted(): Extract<JournalEntry, { kind: 'accepted' }>[];
  /** Posts a webhook to the public address; the signature is right unless one is given. */
  post(to: string, fields: Record<string, string>, signature?: string): Promise<Response>;
  close(): Promise<void>;
}

/** The product, the stand-in of the text service, and a proxy between the two. */
export async function startTextLab(
  context: Partial<GivenContext> = {},
  /** How long each step of a text takes at the service, and so how late its callbacks come. */
  stepMs = 20,
): Promise<TextLab> {
  const folder = mkdtempSync(path.join(os.tmpdir(), 'thawline-texts-'));
  const proxy = await startProxy();
  const fake = await startFakeTexts({
    port: 0,
    accountSid: ACCOUNT,
    authToken: TOKEN,
    number: OURS,
    inboundUrl: `${proxy.url}/webhooks/texts/inbound`,
    journalPath: path.join(folder, 'texts.jsonl'),
    stepMs,
    slowMs: 100,
    webhookRetryMs: [100, 200, 400, 800],
  });
  const workers: Outbox[] = [];
  let offsetMs = 0;
  let journalFrom = 0;
  const setNow = (now: Instant): void => {
    offsetMs = now - Date.now();
  };
  setNow(AFTERNOON);
  const server = await startServer({
    config: {
      http: { host: '127.0.0.1', port: 0, publicUrl: proxy.url, trustProxyHops: 1 },
      texts: { account: ACCOUNT, token: TOKEN, baseUrl: fake.url, from: OURS },
    },
    context: {
      wakeOutbox: () => workers.at(-1)?.wake(),
      // Retries are due later, so this clock has to run.
      clock: () => Date.now() + offsetMs,
      ...context,
    },
  });
  proxy.pointAt(server.url);
  const sender = (timeoutMs = 300) => textSender(fake.url, proxy.url, timeoutMs);

  return {
    server,
    fake,
    publicUrl: proxy.url,
    setNow,
    clockOffsetMs: () => offsetMs,
    reset: async () => {
      await Promise.all(workers.splice(0).map((worker) => worker.stop()));
      await server.reset();
      setNow(AFTERNOON);
      fake.setFaults({});
      journalFrom = fake.journal().length;
    },
    sender,
    work: (options = {}) => {
      const worker = startOutbox(server.context, {
        sender: sender(),
        leaseMs: 1_500,
        pollMs: 50,
        roll: () => 0,
        ...options,
      });
      workers.push(worker);
      return {
        wake: () => worker.wake(),
        stop: async () => {
          workers.splice(workers.indexOf(worker), 1);
          await worker.stop();
        },
      };
    },
    accepted: () =>
      fake
        .journal()
        .slice(journalFrom)
        .filter((entry) => entry.kind === 'accepted'),
    post: (to, fields, signature) => {
      const url = `${proxy.url}/webhooks/texts/${to}`;
      return fetch(url, {
        method: 'POST',
        headers: {
          'Content-Type': 'application/x-www-form-urlencoded',
          'X-Twilio-Signature': signature ?? webhookSignature(TOKEN, url, fields),
        },
        body: new URLSearchParams(fields).toString(),
      });
    },
    close: async () => {
      await Promise.all(workers.map((worker) => worker.stop()));
      await fake.close();
      await server.close();
      await proxy.close();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

/** Takes a call as a dispatcher would; it queues no text of its own unless `mayText`. */
export async function takeACall(
  server: TestServer,
  told: Parameters<typeof aCall>[1] = {},
): Promise<CallDetail> {
  const mara = await server.signIn('dispatcher');
  const reply = await mara.call('takeCall', {
    params: { stormId: server.stormId },
    body: aCall(server.context.clock(), told),
  });
  if (reply.status !== 201) throw new Error(`the call was not taken: ${reply.text}`);
  return reply.body as CallDetail;
}

/** A stop that its technician drives to, due in 40 minutes. */
export async function aTravellingStop(server: TestServer, callId: string): Promise<StopRecord> {
  const technicianId = randomUUID();
  await TechnicianRecord.create({
    id: technicianId,
    name: 'Juno Marsh',
    phone: '+12525550121',
    skills: [],
    van: {},
    startLon: 0,
    startLat: 0,
  });
  const arriveAt = new Date(server.context.clock() + 40 * MINUTE_MS);
  return StopRecord.create({
    id: randomUUID(),
    stormId: server.stormId,
    technicianId,
    callId,
    position: 1,
    state: 'travelling',
    arriveAt,
    finishAt: new Date(arriveAt.getTime() + 45 * MINUTE_MS),
    etaAt: arriveAt,
    driveMinutes: 40,
    because: 'a test',
  });
}

/** A text that waits in the outbox and is due now. */
export function aWaitingText(
  server: TestServer,
  facts: Partial<Parameters<typeof MessageRecord.build>[0]> = {},
): Promise<MessageRecord> {
  const at = new Date(server.context.clock());
  return MessageRecord.create({
    id: randomUUID(),
    stormId: server.stormId,
    phone: '+12525550142',
    direction: 'out',
    body: `A text, ${randomUUID()}`,
    state: 'new',
    segments: 1,
    at,
    dueAt: at,
    ...facts,
  });
}

/** Only what will never hold takes so long, also on a busy machine. */
const PATIENCE_MS = 60_000;

/** Waits until something holds. */
export async function until(
  holds: () => boolean | Promise<boolean>,
  what: string,
  withinMs = PATIENCE_MS,
): Promise<void> {
  const deadline = Date.now() + withinMs;
  while (!(await holds())) {
    if (Date.now() > deadline) throw new Error(`waited too long for ${what}`);
    await new Promise((resolve) => setTimeout(resolve, 25));
  }
}

interface Proxy {
  readonly url: string;
  pointAt(target: string): void;
  close(): Promise<void>;
}

/** Passes requests on; while it points nowhere it answers 502, as a proxy before a dead product. */
async function startProxy(): Promise<Proxy> {
  let target: URL | null = null;
  const server = createServer((incoming, outgoing) => {
    const fail = (): void => {
      if (!outgoing.headersSent) outgoing.statusCode = 502;
      outgoing.end();
    };
    if (!target) return fail();
    const { hostname, port } = target;
    const onward = forward(
      {
        hostname,
        port,
        path: incoming.url,
        method: incoming.method,
        headers: {
          ...incoming.headers,
          host: `${hostname}:${port}`,
          'x-forwarded-for': '192.0.2.7',
        },
      },
      (answer) => {
        outgoing.writeHead(answer.statusCode ?? 502, answer.headers);
        answer.pipe(outgoing);
      },
    );
    onward.on('error', fail);
    incoming.pipe(onward);
  });
  server.listen(0, '127.0.0.1');
  await once(server, 'listening');
  return {
    url: `http://127.0.0.1:${String((server.address() as AddressInfo).port)}`,
    pointAt: (url) => (target = new URL(url)),
    close: async () => {
      server.close();
      server.closeAllConnections();
      await Promise.resolve();
    },
  };
}
