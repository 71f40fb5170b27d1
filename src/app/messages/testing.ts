import type { MessageDto } from '@shared/contract/messages';
import { idOf, NOW } from '../core/testing';

/** A text to a customer that was sent; for specs. */
export const aMessage = (n: number, change: Partial<MessageDto> = {}): MessageDto => ({
  id: idOf(n),
  callId: idOf(1001),
  phone: '+12525550142',
  direction: 'out',
  body: `Text ${n}`,
  state: 'sent',
  milestone: null,
  segments: 1,
  at: NOW - 60_000,
  trouble: null,
  readAt: null,
  version: 1,
  ...change,
});
