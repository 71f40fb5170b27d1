import { z } from 'zod';
import { Command, Id, Moment, prose, VersionedCommand, Version } from './common';

/** `unknown`: the service may or may not have taken it; a person decides, never a retry. */
export const MESSAGE_STATES = [
  'new',
  'sending',
  'sent',
  'delivered',
  'undelivered',
  'failed',
  'unknown',
  'suppressed',
  'received',
] as const;

export const MessageDto = z.strictObject({
  id: Id,
  callId: Id.nullable(),
  /** E.164 of the customer, whichever way the text went. */
  phone: z.string(),
  direction: z.enum(['out', 'in']),
  body: z.string(),
  state: z.enum(MESSAGE_STATES),
  /** Which moment it tells of, such as `on-the-way`; `null` for what a person wrote. */
  milestone: z.string().nullable(),
  segments: z.int().nonnegative(),
  at: Moment,
  /** Why it was not sent or delivered, in words. */
  trouble: z.string().nullable(),
  readAt: Moment.nullable(),
  version: Version,
});
export type MessageDto = z.infer<typeof MessageDto>;

export const SendMessage = Command.extend({ body: prose(480).pipe(z.string().min(1)) });

/** A person's word on a text whose fate is unknown. */
export const ResolveMessage = VersionedCommand.extend({
  decision: z.enum(['send-again', 'was-sent', 'give-up']),
});
export const ReadMessages = Command;

export const MessageList = z.strictObject({
  /** Unknown fate, failed, or a reply that belongs to no open call. */
  needPerson: z.array(MessageDto),
  recent: z.array(MessageDto),
  countsByState: z.record(z.string(), z.int()),
  segmentsSent: z.int(),
});
export type MessageList = z.infer<typeof MessageList>;
