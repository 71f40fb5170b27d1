import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import type { MessageList } from '@shared/contract/messages';
import { MessageRecord } from '../../server/texts/message-record';
import { bundleProgram } from '../support/bundle-program';
import { testDatabase } from '../support/database';
import { aWaitingText, startTextLab, type TextLab, until } from '../support/texts';

const ROOT = path.resolve(__dirname, '../..');
// Inside the repository, so that the bundle finds its packages.
const FOLDER = path.join(ROOT, '.data', `outbox-program-${String(process.pid)}`);
const PROGRAM = path.join(FOLDER, 'outbox-program.cjs');
const LEASE_MS = 1_500;
/** One that is left alone sends what remains. */
const MOST_KILLS = 8;

let lab: TextLab;
const children = new Set<ChildProcess>();

beforeAll(async () => {
  mkdirSync(FOLDER, { recursive: true });
  await bundleProgram('test/support/outbox-program.ts', PROGRAM);
  // Slow callbacks: quick ones would hide a text that is sent again too soon.
  lab = await startTextLab({}, 1_500);
});
afterEach(() => {
  for (const child of children) child.kill('SIGKILL');
  children.clear();
});
afterAll(async () => {
  await lab.close();
  rmSync(FOLDER, { recursive: true, force: true });
});
beforeEach(() => lab.reset());

type PauseAt = 'never' | 'wire' | 'gate';

/** A sender in its own process, once it is at work. */
async function startSender(pauseAt: PauseAt = 'never'): Promise<ChildProcess> {
  const child = spawn(process.execPath, [PROGRAM], {
    stdio: ['ignore', 'pipe', 'inherit'],
    env: {
      ...process.env,
      OUTBOX_PROGRAM: JSON.stringify({
        database: testDatabase(),
        fakeUrl: lab.fake.url,
        publicUrl: lab.publicUrl,
        clockOffsetMs: lab.clockOffsetMs(),
        leaseMs: LEASE_MS,
        pauseAt,
      }),
    },
  });
  children.add(child);
  await says(child, 'ready');
  return child;
}

const spoken = new WeakMap<ChildProcess, string>();
function says(child: ChildProcess, word: string): Promise<void> {
  if (!spoken.has(child)) {
    spoken.set(child, '');
    child.stdout?.on('data', (chunk: Buffer) =>
      spoken.set(child, `${spoken.get(child) ?? ''}${chunk.toString('utf8')}`),
    );
  }
  return until(() => spoken.get(child)?.includes(`${word}\n`) ?? false, `"${word}"`);
}

async function kill(child: ChildProcess): Promise<void> {
  const gone = once(child, 'exit');
  child.kill('SIGKILL');
  await gone;
  children.delete(child);
}

/** The same pauses in every run of the test. */
function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 1_103_515_245 + 12_345) % 2_147_483_648;
    return state / 2_147_483_648;
  };
}

const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));
const timesAccepted = (id: string) => lab.accepted().filter((one) => one.outbox === id).length;
const countIn = (...states: string[]) => MessageRecord.count({ where: { state: states } });

describe('a sender that is killed again and again', () => {
  it('texts nobody twice, forgets nobody, and shows each text of unknown fate to a person', async () => {
    lab.fake.setFaults({
      sends: [
        '429',
        'none',
        '500',
        '500-after-accept',
        'timeout',
        'timeout-after-accept',
        'none',
        'reset',
        'reset-after-accept',
        'wrong-json',
        'slow',
      ],
      repeat: true,
    });
    const ids: string[] = [];
    for (let n = 0; n < 60; n++) ids.push((await aWaitingText(lab.server)).id);

    const roll = seeded(20_261_003);
    let kills = 0;
    let killedOnTheWire = 0;
    while (kills < MOST_KILLS && (await countIn('new')) > 0) {
      const before = await MessageRecord.sum('attempts');
      const child = await startSender();
      // Each second one while a text is on the wire, the others whenever it comes.
      if (kills % 2 === 0) await pause(150 + roll() * 250);
      else await until(async () => (await MessageRecord.sum('attempts')) > before, 'a hand-over');
      await kill(child);
      kills += 1;
      killedOnTheWire += await countIn('sending');
    }
    const last = await startSender();
    await until(async () => (await countIn('new', 'sending')) === 0, 'all to be handled');
    // What was accepted is found by its callback or in the list, whoever was killed meanwhile.
    const accepted = new Set(lab.accepted().map((one) => one.outbox));
    await until(
      async () =>
        (await MessageRecord.findAll({ where: { state: 'unknown' } })).every(
          ({ id }) => !accepted.has(id),
        ),
      'what was accepted to be found',
    );
    await kill(last);

    expect(ids.filter((id) => timesAccepted(id) > 1)).toEqual([]);
    const texts = await MessageRecord.findAll();
    const missed = texts.filter(
      ({ id, state }) => state !== 'unknown' && state !== 'failed' && !accepted.has(id),
    );
    expect(missed.map(({ state }) => state)).toEqual([]);

    const mara = await lab.server.signIn('dispatcher');
    const reply = await mara.call('listMessages', { params: { stormId: lab.server.stormId } });
    const shown = (reply.body as MessageList).needPerson.map((text) => text.id).sort();
    const lost = texts.filter(({ id }) => !accepted.has(id)).map(({ id }) => id);
    expect(shown).toEqual(lost.sort());
    // A test in which nothing was cut off in the middle would prove nothing.
    expect(kills).toBeGreaterThanOrEqual(5);
    expect(killedOnTheWire).toBeGreaterThan(0);
  }, 300_000);
});

describe('a sender that is paused', () => {
  it('after the gate: nobody else sends its text, and it goes once when the sender wakes', async () => {
    const { id } = await aWaitingText(lab.server);
    const child = await startSender('wire');
    await says(child, 'paused');
    lab.work({ leaseMs: LEASE_MS });
    const stateOf = async () => (await MessageRecord.findByPk(id))?.state;
    await until(async () => (await stateOf()) === 'unknown', 'the lease to lapse');
    await pause(LEASE_MS);
    expect(timesAccepted(id)).toBe(0);

    child.kill('SIGCONT');
    await until(async () => (await stateOf()) === 'delivered', 'the text to be delivered');
    await pause(LEASE_MS);
    expect(timesAccepted(id)).toBe(1);
  });

  it('before the gate: another one sends its text, and the gate is shut when it wakes', async () => {
    const { id } = await aWaitingText(lab.server);
    const child = await startSender('gate');
    await says(child, 'paused');
    expect((await MessageRecord.findByPk(id))?.state).toBe('new');
    lab.work({ leaseMs: LEASE_MS });
    const stateOf = async () => (await MessageRecord.findByPk(id))?.state;
    await until(async () => (await stateOf()) === 'delivered', 'the text to be delivered');

    child.kill('SIGCONT');
    await pause(1_000);
    expect([await stateOf(), timesAccepted(id)]).toEqual(['delivered', 1]);
  });
});
