import { z } from 'zod';

/**
 * What goes wrong with one send. "After accept" means that the text was taken and will arrive, and
 * only the answer is lost: the case in which a careless sender texts twice.
 */
export const SEND_FAULTS = [
  'none',
  '429',
  '500',
  '500-after-accept',
  'timeout',
  'timeout-after-accept',
  'reset',
  'reset-after-accept',
  'slow',
  'wrong-json',
] as const;
export type SendFault = (typeof SEND_FAULTS)[number];

/** What goes wrong with one look into the message list; `empty` is a list that lags behind. */
export const LIST_FAULTS = ['none', '500', 'timeout', 'empty'] as const;
export type ListFault = (typeof LIST_FAULTS)[number];

export const FaultPlan = z.strictObject({
  /** One fault per send, in order; when they are used up all is well, unless `repeat`. */
  sends: z.array(z.enum(SEND_FAULTS)).default([]),
  lists: z.array(z.enum(LIST_FAULTS)).default([]),
  /** Whether the two rows above start again at their end. */
  repeat: z.boolean().default(false),
  callbacks: z
    .strictObject({
      /** How often each status callback is posted. */
      copies: z.int().min(0).max(20).default(1),
      /** Whether a text's callbacks are all posted at its end, newest first. */
      reversed: z.boolean().default(false),
    })
    .prefault({}),
  /** How each text ends. */
  delivery: z.enum(['delivered', 'undelivered', 'failed']).default('delivered'),
});
export type FaultPlan = z.infer<typeof FaultPlan>;
export type FaultOrder = z.input<typeof FaultPlan>;

/** The faults that are still to come. */
export class FaultQueue {
  private plan: FaultPlan = FaultPlan.parse({});
  private sendsTaken = 0;
  private listsTaken = 0;

  /** Replaces everything that was ordered before. */
  set(order: FaultOrder): void {
    this.plan = FaultPlan.parse(order);
    this.sendsTaken = 0;
    this.listsTaken = 0;
  }

  get callbacks(): FaultPlan['callbacks'] {
    return this.plan.callbacks;
  }

  get delivery(): FaultPlan['delivery'] {
    return this.plan.delivery;
  }

  nextSend(): SendFault {
    return this.pick(this.plan.sends, this.sendsTaken++) ?? 'none';
  }

  nextList(): ListFault {
    return this.pick(this.plan.lists, this.listsTaken++) ?? 'none';
  }

  private pick<T>(row: readonly T[], taken: number): T | undefined {
    return row[this.plan.repeat && row.length > 0 ? taken % row.length : taken];
  }
}
