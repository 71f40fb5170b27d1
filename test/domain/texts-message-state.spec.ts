import fc from 'fast-check';
import {
  afterProviderStatus,
  isMessageFinal,
  judgeFailure,
  MAX_SEND_ATTEMPTS,
  mayMessageBecome,
  MESSAGE_STATES,
  retryDelayMs,
} from '@shared/domain/texts/message-state';

const STATUSES = ['accepted', 'queued', 'sending', 'sent', 'delivered', 'undelivered', 'failed'];

describe('afterProviderStatus', () => {
  it('lets no late report overwrite a newer one', () => {
    expect(afterProviderStatus('delivered', 'sent')).toBe('delivered');
    expect(afterProviderStatus('delivered', 'failed')).toBe('delivered');
    expect(afterProviderStatus('sent', 'queued')).toBe('sent');
    expect(afterProviderStatus('unknown', 'queued')).toBe('sent');
  });

  it('ends in the same state in whatever order and however often the reports come', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...MESSAGE_STATES),
        fc.array(fc.constantFrom(...STATUSES), { minLength: 1, maxLength: 8 }),
        fc.infiniteStream(fc.nat()),
        (start, statuses, dice) => {
          const inOrder = statuses.reduce(afterProviderStatus, start);
          const shuffled = [...statuses, ...statuses]
            .map((status) => ({ status, at: dice.next().value }))
            .sort((a, b) => a.at - b.at)
            .map(({ status }) => status);
          expect(shuffled.reduce(afterProviderStatus, start)).toBe(inOrder);
        },
      ),
    );
  });

  it('takes only steps that the life of a text allows', () => {
    for (const from of MESSAGE_STATES) {
      for (const status of STATUSES) {
        const to = afterProviderStatus(from, status);
        expect(to === from || mayMessageBecome(from, to)).toBe(true);
      }
    }
  });

  it('ignores a word that it does not know', () => {
    expect(afterProviderStatus('sending', 'teleported')).toBe('sending');
  });
});

describe('mayMessageBecome', () => {
  it('lets a text that was accepted never be sent again', () => {
    for (const from of ['sent', 'delivered', 'undelivered', 'failed', 'suppressed'] as const) {
      expect(mayMessageBecome(from, 'new')).toBe(false);
      expect(mayMessageBecome(from, 'sending')).toBe(false);
    }
  });

  it('leaves an unknown text to a person and calls it unfinished', () => {
    expect(mayMessageBecome('unknown', 'sending')).toBe(false);
    expect(isMessageFinal('unknown')).toBe(false);
  });
});

describe('judgeFailure', () => {
  it.each([
    [{ httpStatus: 429, providerCode: 20429 }, true],
    [{ networkCode: 'ECONNREFUSED' }, true],
    [{ networkCode: 'ENOTFOUND' }, true],
    [{ networkCode: 'ETIMEDOUT', whileConnecting: true }, true],
    [{ httpStatus: 400, providerCode: 21211 }, false],
    [{ httpStatus: 400, providerCode: 21610 }, false],
    [{ httpStatus: 401, providerCode: 20003 }, false],
    [{ httpStatus: 403 }, false],
  ])('calls %j refused for sure (retryable: %s)', (failure, retryable) => {
    expect(judgeFailure(failure)).toMatchObject({ outcome: 'refused', retryable });
  });

  it.each([
    { httpStatus: 500, providerCode: 20500 },
    { httpStatus: 503 },
    { httpStatus: 408 },
    { httpStatus: 302 },
    { httpStatus: 201 },
    { networkCode: 'ECONNRESET' },
    { networkCode: 'ECONNABORTED' },
    { networkCode: 'ETIMEDOUT' },
    { networkCode: 'EPIPE' },
    {},
  ])('calls %j unknown, because it may have been accepted', (failure) => {
    expect(judgeFailure(failure).outcome).toBe('unknown');
  });
});

describe('retryDelayMs', () => {
  it('waits longer each time, inside known bounds, and gives up in the end', () => {
    expect(retryDelayMs(1, 0)).toBe(500);
    expect(retryDelayMs(1, 0.999999)).toBeCloseTo(2000, -1);
    expect(retryDelayMs(MAX_SEND_ATTEMPTS - 1, 0.999999)).toBeLessThanOrEqual(300_000);
    expect(retryDelayMs(MAX_SEND_ATTEMPTS, 0.5)).toBeNull();
    const waits = [1, 2, 3, 4, 5, 6, 7].map((attempt) => retryDelayMs(attempt, 0.5) ?? 0);
    expect(waits).toEqual([...waits].sort((a, b) => a - b));
  });
});
