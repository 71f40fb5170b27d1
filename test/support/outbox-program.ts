import { pino } from 'pino';
import { z } from 'zod';
import type { Context } from '../../server/context';
import { connect } from '../../server/db/connect';
import { SILENT } from '../../server/realtime/live';
import { startOutbox } from '../../server/texts/outbox';
import type { TextSender } from '../../server/texts/send-text';
import { TEST_REGION } from './region';
import { textSender } from './texts-sender';

/** A worker of the outbox in a process of its own, to be killed and paused. It is told what to do in one variable. */
const Told = z.object({
  database: z.object({
    host: z.string(),
    port: z.number(),
    user: z.string(),
    password: z.string(),
    name: z.string(),
  }),
  fakeUrl: z.string(),
  publicUrl: z.string(),
  clockOffsetMs: z.number(),
  leaseMs: z.number(),
  /** Where it stops itself: between gate and wire, or between lease and gate. */
  pauseAt: z.enum(['never', 'wire', 'gate']),
});

const told = Told.parse(JSON.parse(process.env['OUTBOX_PROGRAM'] ?? '{}'));
const say = (word: string): void => void process.stdout.write(`${word}\n`);
const pauseHere = (): void => {
  say('paused');
  process.kill(process.pid, 'SIGSTOP');
};

const real = textSender(told.fakeUrl, told.publicUrl, 300);
const sender: TextSender = {
  ...real,
  send: (text) => {
    if (told.pauseAt === 'wire') pauseHere();
    return real.send(text);
  },
};

let clockReadings = 0;
const clock = (): number => {
  clockReadings += 1;
  // With one text due, the first reading is the lease's and the second the gate's.
  if (told.pauseAt === 'gate' && clockReadings === 2) pauseHere();
  return Date.now() + told.clockOffsetMs;
};

// Only what the outbox reaches; the texts' configuration is in the sender.
const context = {
  config: { environment: 'test' },
  sequelize: connect(told.database),
  log: pino({ level: 'error' }, pino.destination(2)),
  clock,
  live: SILENT,
  region: TEST_REGION,
  wakeOutbox: () => undefined,
} as unknown as Context;
startOutbox(context, { sender, leaseMs: told.leaseMs, pollMs: 50, roll: () => 0 });
say('ready');
