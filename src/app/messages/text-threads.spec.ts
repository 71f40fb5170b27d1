/** @jest-environment node */
import type { MessageDto } from '@shared/contract/messages';
import { aCallRow, idOf, NOW } from '../core/testing';
import { newestOf, threadsOf } from './text-threads';
import { aMessage } from './testing';

const PHONE = '+12525550142';
const OTHER = '+12525550150';

describe('threadsOf', () => {
  it('groups by phone, the thread with the newest text first', () => {
    const threads = threadsOf(
      [
        aMessage(1, { phone: PHONE, at: NOW - 3000 }),
        aMessage(2, { phone: OTHER, at: NOW - 2000 }),
        aMessage(3, { phone: PHONE, at: NOW - 1000 }),
      ],
      [],
    );
    expect(threads.map(({ phone, last }) => [phone, last?.id])).toEqual([
      [PHONE, idOf(3)],
      [OTHER, idOf(2)],
    ]);
  });

  it('finds the call of a reply that came without one', () => {
    const call = aCallRow(7, { phone: PHONE });
    const [thread] = threadsOf([aMessage(1, { phone: PHONE, callId: null })], [call]);
    expect(thread).toMatchObject({ callId: call.id, call });
  });

  it('shows a call with unread texts that are older than what the list brings', () => {
    const call = aCallRow(7, { phone: PHONE, unreadTexts: 2 });
    expect(threadsOf([], [call])).toMatchObject([{ phone: PHONE, unread: 2, last: null }]);
  });
});

describe('newestOf', () => {
  it('keeps the newer version of a text, whichever list brings it', () => {
    const old = aMessage(1, { state: 'sent', version: 1 });
    const now: MessageDto = { ...old, state: 'delivered', version: 2 };
    expect(newestOf([now], [old]).get(old.id)?.state).toBe('delivered');
    expect(newestOf([old], [now]).get(old.id)?.state).toBe('delivered');
  });
});
