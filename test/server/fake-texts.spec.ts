import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { appendFileSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import path from 'node:path';

import { build } from 'esbuild';
import twilio from 'twilio';

import type { SendFault } from '../../server/fakes/fake-faults';
import { type FakeTexts, startFakeTexts } from '../../server/fakes/text-service';
import { createTextSender, type TextSender } from '../../server/texts/send-text';

const ACCOUNT = 'AC0123456789abcdef0123456789abcdef';
const TOKEN = 'f1e2d3c4b5a69788f1e2d3c4b5a69788';
const OURS = '+15555550100';
const PHONE = '+15555550142';

interface Hook {
  readonly url: string;
  readonly signature: string;
  readonly fields: Readonly<Record<string, string>>;
}

/** A receiver of webhooks: what a product would get, and what it answers. */
interface Receiver {
  readonly url: string;
  readonly hooks: Hook[];
  answers: number[];
  close(): Promise<void>;
}

async function startReceiver(): Promise<Receiver> {
  const receiver = { hooks: [] as Hook[], answers: [] as number[] };
  let base = '';
  const server: Server = createServer((req, res) => {
    let text = '';
    req.on('data', (chunk: Buffer) => (text += chunk.toString('utf8')));
    req.on('end', () => {
      receiver.hooks.push({
        url: base + (req.url ?? ''),
        signature: String(req.headers['x-twilio-signature']),
        fields: Object.fromEntries(new URLSearchParams(text)),
      });
      res.statusCode = receiver.answers.shift() ?? 200;
      res.end();
    });
  });
  server.listen(0, '127.0.0.1');
  await once(server, 'listening');
  base = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  return Object.assign(receiver, {
    url: base,
    close: async () => {
      server.close();
      server.closeAllConnections();
    },
  });
}

async function until(holds: () => boolean, what: string): Promise<void> {
  const deadline = Date.now() + 60_000;
  while (!holds()) {
    if (Date.now() > deadline) throw new Error(`Waited too long for ${what}`);
    await new Promise((resolve) => setTimeout(resolve, 10));
  }
}

let folder: string;
let receiver: Receiver;
let fake: FakeTexts;
let sender: TextSender;

const journalPath = () => path.join(folder, 'texts.jsonl');
const start = (stepMs = 5) =>
  startFakeTexts({
    port: 0,
    accountSid: ACCOUNT,
    authToken: TOKEN,
    number: OURS,
    inboundUrl: `${receiver.url}/inbound?region=demo`,
    journalPath: journalPath(),
    stepMs,
    slowMs: 50,
    webhookRetryMs: [10, 10],
  });
const senderTo = (baseUrl: string, over: { authToken?: string; from?: string } = {}) =>
  createTextSender({
    accountSid: ACCOUNT,
    authToken: TOKEN,
    baseUrl,
    from: OURS,
    statusCallbackUrl: `${receiver.url}/status`,
    timeoutMs: 400,
    ...over,
  });
const accepted = () => fake.journal().filter((entry) => entry.kind === 'accepted');
const lookUp = (body: string, since: number, takenSids: ReadonlySet<string> = new Set()) =>
  sender.findByOutboxId({ to: PHONE, body, outboxId: 'o1', since, takenSids });

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'thawline-texts-'));
  receiver = await startReceiver();
  fake = await start();
  sender = senderTo(fake.url);
});

afterEach(async () => {
  await fake.close();
  await receiver.close();
  rmSync(folder, { recursive: true, force: true });
});

describe('sending a text', () => {
  it('is accepted once and carries the outbox row into the journal', async () => {
    const result = await sender.send({ to: PHONE, body: 'On the way.', outboxId: 'row-7' });
    expect(result).toMatchObject({ outcome: 'accepted', status: 'queued' });
    expect(accepted()).toMatchObject([
      { to: PHONE, from: OURS, body: 'On the way.', outbox: 'row-7' },
    ]);
  });

  it('is reported as sent, then delivered, by callbacks that the SDK finds rightly signed', async () => {
    const body = 'Ünïcode & signs = + % /';
    const result = await sender.send({ to: PHONE, body, outboxId: 'row 8&9' });
    await until(() => receiver.hooks.length === 2, 'two callbacks');

    expect(receiver.hooks.map((hook) => hook.fields['MessageStatus'])).toEqual([
      'sent',
      'delivered',
    ]);
    for (const { url, signature, fields } of receiver.hooks) {
      expect(new URL(url).searchParams.get('outbox')).toBe('row 8&9');
      expect(fields['MessageSid']).toBe('sid' in result ? result.sid : 'none');
      expect(twilio.validateRequest(TOKEN, signature, url, { ...fields })).toBe(true);
      const forged = { ...fields, MessageStatus: 'failed' };
      expect(twilio.validateRequest(TOKEN, signature, url, forged)).toBe(false);
      expect(twilio.validateRequest(`${TOKEN}x`, signature, url, { ...fields })).toBe(false);
      expect(twilio.validateRequest(TOKEN, signature, `${url}x`, { ...fields })).toBe(false);
    }
  });

  it.each([
    [21211, { to: '555-0142', body: 'x' }, {}],
    [21211, { to: '+1555555014', body: 'x' }, {}],
    [21212, { to: PHONE, body: 'x' }, { from: '5555550100' }],
    [21606, { to: PHONE, body: 'x' }, { from: '+15555550199' }],
    [21602, { to: PHONE, body: '  ' }, {}],
    [21617, { to: PHONE, body: 'a'.repeat(1601) }, {}],
    [20003, { to: PHONE, body: 'x' }, { authToken: 'not-the-token' }],
  ])('is refused for good with %i', async (code, text, over) => {
    const result = await senderTo(fake.url, over).send({ ...text, outboxId: 'o1' });
    expect(result).toMatchObject({ outcome: 'refused', code, retryable: false });
    expect(accepted()).toEqual([]);
  });

  it('takes a body of exactly 1,600 characters', async () => {
    const result = await sender.send({ to: PHONE, body: 'a'.repeat(1600), outboxId: 'o1' });
    expect(result.outcome).toBe('accepted');
  });

  it('is refused with 21610 when the service itself blocks the phone', async () => {
    fake.block([PHONE]);
    const result = await sender.send({ to: PHONE, body: 'x', outboxId: 'o1' });
    expect(result).toMatchObject({ outcome: 'refused', code: 21610 });
  });

  it('is refused and may be tried again when nobody listens', async () => {
    const closed = await startReceiver();
    await closed.close();
    const result = await senderTo(closed.url).send({ to: PHONE, body: 'x', outboxId: 'o1' });
    expect(result).toMatchObject({ outcome: 'refused', code: null, retryable: true });
  });

  it('asks for the basic credentials of the account', async () => {
    const url = `${fake.url}/2010-04-01/Accounts/${ACCOUNT}/Messages.json`;
    const answer = await fetch(url, { method: 'POST', body: new URLSearchParams({ To: PHONE }) });
    expect(answer.status).toBe(401);
    expect(await answer.json()).toMatchObject({ code: 20003 });
  });
});

describe('a send that goes wrong', () => {
  const cases: readonly (readonly [SendFault, string, number])[] = [
    ['429', 'refused', 0],
    ['500', 'unknown', 0],
    ['500-after-accept', 'unknown', 1],
    ['timeout', 'unknown', 0],
    ['timeout-after-accept', 'unknown', 1],
    ['reset', 'unknown', 0],
    ['reset-after-accept', 'unknown', 1],
    ['slow', 'accepted', 1],
    ['wrong-json', 'unknown', 1],
  ];

  it.each(cases)('%s: the sender calls it %s, and %i was accepted', async (fault, outcome, n) => {
    fake.setFaults({ sends: [fault] });
    const since = Date.now();
    const result = await sender.send({ to: PHONE, body: 'Arriving at 2:30.', outboxId: 'o1' });

    expect(result.outcome).toBe(outcome);
    expect(accepted()).toHaveLength(n);
    // One request went out: nothing below us tries again in secret.
    expect(fake.journal().filter((entry) => entry.kind === 'fault')).toHaveLength(1);
    expect(await lookUp('Arriving at 2:30.', since)).toMatchObject({ found: n ? 'one' : 'none' });
  });

  it('says that a 429 may be tried again', async () => {
    fake.setFaults({ sends: ['429'] });
    const text = { to: PHONE, body: 'x', outboxId: 'o1' };
    expect(await sender.send(text)).toMatchObject({ code: 20429, retryable: true });
    expect(await sender.send(text)).toMatchObject({ outcome: 'accepted' });
  });

  it('reports a text whose acceptance was lost, so that its row can be found by the callback', async () => {
    fake.setFaults({ sends: ['timeout-after-accept'] });
    await sender.send({ to: PHONE, body: 'x', outboxId: 'row-9' });
    await until(() => receiver.hooks.length === 2, 'callbacks');
    expect(receiver.hooks.map(({ url }) => new URL(url).searchParams.get('outbox'))).toEqual([
      'row-9',
      'row-9',
    ]);
  });
});

describe('looking for a text that may have been accepted', () => {
  it('takes no text that belongs to another row, is older, or says something else', async () => {
    const first = await sender.send({ to: PHONE, body: 'same words', outboxId: 'o1' });
    const sid = 'sid' in first ? first.sid : '';
    const now = Date.now();
    expect(await lookUp('same words', now)).toMatchObject({ found: 'one', sid });
    expect(await lookUp('same words', now, new Set([sid]))).toEqual({ found: 'none' });
    expect(await lookUp('same words', now + 120_000)).toEqual({ found: 'none' });
    expect(await lookUp('other words', now)).toEqual({ found: 'none' });
  });

  it('leaves it to a person when two texts fit', async () => {
    await sender.send({ to: PHONE, body: 'same words', outboxId: 'o1' });
    await sender.send({ to: PHONE, body: 'same words', outboxId: 'o2' });
    expect(await lookUp('same words', Date.now())).toMatchObject({ found: 'several' });
  });

  it('says that it does not know when the list fails, and none when the list lags', async () => {
    await sender.send({ to: PHONE, body: 'x', outboxId: 'o1' });
    fake.setFaults({ lists: ['500', 'timeout', 'empty', 'none'] });
    const found = [];
    for (let i = 0; i < 4; i++) found.push((await lookUp('x', Date.now())).found);
    expect(found).toEqual(['unknown', 'unknown', 'none', 'one']);
  });

  it('pages through the list as the SDK asks for it', async () => {
    for (let i = 0; i < 7; i++) await sender.send({ to: PHONE, body: `n${i}`, outboxId: `o${i}` });
    await sender.send({ to: '+15555550143', body: 'elsewhere', outboxId: 'o8' });
    const base = `${fake.url}/2010-04-01/Accounts/${ACCOUNT}/Messages.json`;
    const headers = {
      Authorization: `Basic ${Buffer.from(`${ACCOUNT}:${TOKEN}`).toString('base64')}`,
    };
    const bodies: string[] = [];
    let next: string | null = `${base}?To=${encodeURIComponent(PHONE)}&PageSize=3`;
    while (next !== null) {
      const answer: { messages: { body: string }[]; next_page_uri: string | null } = await (
        await fetch(next, { headers })
      ).json();
      bodies.push(...answer.messages.map(({ body }) => body));
      next = answer.next_page_uri === null ? null : fake.url + answer.next_page_uri;
    }
    expect(bodies).toEqual(['n6', 'n5', 'n4', 'n3', 'n2', 'n1', 'n0']);
  });
});

describe('callbacks', () => {
  it('come several times and newest first when that is ordered', async () => {
    fake.setFaults({ callbacks: { copies: 2, reversed: true }, delivery: 'undelivered' });
    await sender.send({ to: PHONE, body: 'x', outboxId: 'o1' });
    await until(() => receiver.hooks.length === 4, 'four callbacks');
    expect(receiver.hooks.map(({ fields }) => fields['MessageStatus'])).toEqual([
      'undelivered',
      'undelivered',
      'sent',
      'sent',
    ]);
    expect(receiver.hooks[0]?.fields['ErrorCode']).toBe('30003');
  });

  it('are posted again when the product answers 503, and no more once it takes them', async () => {
    receiver.answers = [503, 503, 200];
    expect(await fake.inbound({ from: PHONE, body: 'hello' })).toEqual([200]);
    expect(receiver.hooks).toHaveLength(3);
    const answered = fake
      .journal()
      .flatMap((entry) => (entry.kind === 'webhook' ? [entry.httpStatus] : []));
    expect(answered).toEqual([503, 503, 200]);
  });
});

describe('a text from a phone', () => {
  it('reaches the product by a webhook that the SDK finds rightly signed', async () => {
    const answers = await fake.inbound({ from: PHONE, body: 'STOP', copies: 3 });
    expect(answers).toEqual([200, 200, 200]);
    expect(new Set(receiver.hooks.map(({ fields }) => fields['MessageSid'])).size).toBe(1);
    const [hook] = receiver.hooks;
    expect(hook?.fields).toMatchObject({
      From: PHONE,
      To: OURS,
      Body: 'STOP',
      AccountSid: ACCOUNT,
    });
    expect(
      twilio.validateRequest(TOKEN, hook?.signature ?? '', `${receiver.url}/inbound?region=demo`, {
        ...hook?.fields,
      }),
    ).toBe(true);
  });

  it('can be sent by the control route and by the form of the page', async () => {
    const control = await fetch(`${fake.url}/_control/inbound`, {
      method: 'POST',
      headers: { 'Content-Type': 'application/json' },
      body: JSON.stringify({ from: PHONE, body: 'We are home' }),
    });
    expect(await control.json()).toEqual({ answers: [200] });
    const form = await fetch(`${fake.url}/inbound`, {
      method: 'POST',
      body: new URLSearchParams({ from: '+1 (555) 555-0143', body: 'HELP' }),
      redirect: 'manual',
    });
    expect(form.status).toBe(303);
    await until(() => receiver.hooks.length === 2, 'both texts');
    expect(receiver.hooks.map(({ fields }) => fields['From'])).toEqual([PHONE, '+15555550143']);
  });

  it('is refused by the control routes when it is no phone, as is a fault without a name', async () => {
    const post = (route: string, body: object) =>
      fetch(`${fake.url}/_control/${route}`, {
        method: 'POST',
        headers: { 'Content-Type': 'application/json' },
        body: JSON.stringify(body),
      }).then(({ status }) => status);
    expect(await post('inbound', { from: 'x', body: 'hi' })).toBe(422);
    expect(await post('faults', { sends: ['melt'] })).toBe(422);
    expect(await post('faults', { sends: ['429'] })).toBe(204);
  });
});

describe('the page', () => {
  it('shows both sides of a thread, and shows mark-up as letters', async () => {
    await sender.send({ to: PHONE, body: '<img src=x onerror=alert(1)>', outboxId: 'o1' });
    await fake.inbound({ from: PHONE, body: `"quotes" & 'more'` });
    const answer = await fetch(`${fake.url}/threads`);
    const html = await answer.text();
    expect(html).toContain('&lt;img src=x onerror=alert(1)&gt;');
    expect(html).not.toContain('<img');
    expect(html).toContain('&quot;quotes&quot; &amp; &#39;more&#39;');
    expect(html.match(/<section>/g)).toHaveLength(1);
    expect(answer.headers.get('content-security-policy')).toContain("default-src 'none'");
    expect(await (await fetch(fake.url)).text()).toContain('<iframe src="/threads"');
  });
});

describe('the journal', () => {
  it('is append-only and survives a torn last line', async () => {
    await sender.send({ to: PHONE, body: 'before', outboxId: 'o1' });
    await until(() => receiver.hooks.length === 2, 'callbacks');
    await fake.close();
    const before = readFileSync(journalPath(), 'utf8');
    appendFileSync(journalPath(), '{"n":99,"kind":"acc');

    fake = await start();
    await senderTo(fake.url).send({ to: PHONE, body: 'after', outboxId: 'o2' });

    expect(readFileSync(journalPath(), 'utf8').startsWith(before)).toBe(true);
    expect(accepted().map((entry) => 'body' in entry && entry.body)).toEqual(['before', 'after']);
    const numbers = fake.journal().map(({ n }) => n);
    expect(numbers).toEqual(numbers.map((_, i) => i + 1));
    const shown = (await (await fetch(`${fake.url}/_control/journal`)).json()) as unknown[];
    expect(shown.length).toBeGreaterThanOrEqual(numbers.length);
    // A delivery may be reported between the two looks: what was shown is the journal's beginning.
    expect(fake.journal().slice(0, shown.length)).toEqual(shown);
  });

  it('lets a fake that was killed go on: the text is listed and its delivery is reported', async () => {
    await fake.close();
    const program = path.join(folder, 'fakes-main.cjs');
    await build({
      entryPoints: [path.resolve(__dirname, '../../server/fakes/fakes-main.ts')],
      outfile: program,
      bundle: true,
      platform: 'node',
      packages: 'external',
      logLevel: 'error',
    });
    const child = runProgram(program, folder, `${receiver.url}/inbound`);
    const url = await addressOf(child);
    const sent = await senderTo(url).send({ to: PHONE, body: 'x', outboxId: 'row-1' });
    child.kill('SIGKILL');
    await once(child, 'exit');
    const statuses = () => receiver.hooks.map(({ fields }) => fields['MessageStatus']);
    expect(statuses()).not.toContain('delivered');

    const again = runProgram(program, folder, `${receiver.url}/inbound`);
    try {
      sender = senderTo(await addressOf(again));
      const sid = 'sid' in sent ? sent.sid : 'none';
      expect(await lookUp('x', Date.now())).toMatchObject({ found: 'one', sid });
      await until(() => statuses().includes('delivered'), 'a callback after the restart');
      expect(receiver.hooks.at(-1)?.fields).toMatchObject({ MessageSid: sid });
    } finally {
      again.kill('SIGTERM');
      await once(again, 'exit');
      fake = await start();
    }
  });
});

function runProgram(program: string, dataFolder: string, inboundUrl: string): ChildProcess {
  return spawn(process.execPath, [program], {
    env: {
      NODE_PATH: path.resolve(__dirname, '../../node_modules'),
      THAWLINE_FAKE_TEXTS_PORT: '0',
      THAWLINE_TEXT_ACCOUNT: ACCOUNT,
      THAWLINE_TEXT_TOKEN: TOKEN,
      THAWLINE_TEXT_FROM: OURS,
      THAWLINE_TEXT_INBOUND_URL: inboundUrl,
      THAWLINE_DATA_FOLDER: dataFolder,
    },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
}

async function addressOf(child: ChildProcess): Promise<string> {
  let said = '';
  child.stdout?.on('data', (chunk: Buffer) => (said += chunk.toString('utf8')));
  await until(() => said.includes('\n'), 'the stand-in to say where it is');
  return /http:\/\/127\.0\.0\.1:\d+/.exec(said)?.[0] ?? '';
}
