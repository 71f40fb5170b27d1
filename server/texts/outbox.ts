import { setTimeout as pause } from 'node:timers/promises';
import type { Context } from '../context';
import { handOver, putBack } from './hand-over';
import { leaseDue, type Leased } from './lease-texts';
import { poll } from './poll';
import { reconcileUnknown } from './reconcile-texts';
import { giveUpLapsed, recordResult } from './record-result';
import { createTextSender, type SendResult, type TextSender } from './send-text';

export interface Outbox {
  /** Looks for waiting texts now. */
  wake(): void;
  stop(): Promise<void>;
}

export interface OutboxOptions {
  readonly sender?: TextSender;
  /** How long a text may be on the wire before it counts as lost; several times the sender's timeout. */
  readonly leaseMs?: number;
  readonly pollMs?: number;
  /** Spreads retries; a number from 0 up to, not including, 1. */
  readonly roll?: () => number;
}

const LEASE_MS = 15_000;
const POLL_MS = 500;
/** Texts on the wire at a time: a slow answer must not hold up the rest. */
const LANES = 4;
const RECORD_ATTEMPTS = 5;

/**
 * Sends what waits in `messages`: lease, gate, wire, record. Any number of workers in any number of
 * processes may run, and each may be killed or paused at any moment: a text whose fate is not known
 * is asked after and shown to a person, never sent again by itself.
 */
export function startOutbox(context: Context, options: OutboxOptions = {}): Outbox {
  const sender = options.sender ?? senderFor(context);
  const { leaseMs = LEASE_MS, pollMs = POLL_MS, roll = Math.random } = options;
  let isStopping = false;

  const sendDue = async (): Promise<void> => {
    while (!isStopping) {
      const leased = await leaseDue(context, LANES, leaseMs);
      if (leased.length === 0) return;
      await Promise.all(leased.map(deliver));
    }
  };

  const deliver = async (leased: Leased): Promise<void> => {
    try {
      // A clock that goes on while the process is paused.
      const beganMs = performance.now();
      const text = await handOver(context, leased, leaseMs);
      if (!text) return;
      if (performance.now() - beganMs > leaseMs / 2) return await putBack(context, leased);
      await record(leased, await sender.send(text));
    } catch (error) {
      // One bad row must not hold up the others; its lease lapses and it is looked at again.
      context.log.error({ err: error, message: leased.id }, 'a text could not be handled');
    }
  };

  const record = async (leased: Leased, result: SendResult): Promise<void> => {
    for (let attempt = 1; ; attempt++) {
      try {
        return await recordResult(context, leased, result, roll());
      } catch (error) {
        if (attempt === RECORD_ATTEMPTS) throw error;
        await pause(200 * attempt);
      }
    }
  };

  const tidy = async (): Promise<void> => {
    await giveUpLapsed(context);
    await reconcileUnknown(context, sender, leaseMs);
  };

  const onFailure = (error: unknown): void =>
    context.log.warn({ err: error }, 'the outbox could not work; it tries again');
  const sending = poll(sendDue, pollMs, onFailure);
  const tidying = poll(tidy, pollMs, onFailure);
  return {
    wake: () => sending.wake(),
    stop: async () => {
      isStopping = true;
      await Promise.all([sending.stop(), tidying.stop()]);
    },
  };
}

function senderFor({ config }: Context): TextSender {
  return createTextSender({
    accountSid: config.texts.account,
    authToken: config.texts.token,
    baseUrl: config.texts.baseUrl,
    from: config.texts.from,
    statusCallbackUrl: `${config.http.publicUrl}/webhooks/texts/status`,
  });
}
