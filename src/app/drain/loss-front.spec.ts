/** @jest-environment node */
import { HOUR_MS } from '@shared/domain/instant';
import { aCallRow, NOW } from '../core/testing';
import { lossFront, lostWithin } from './loss-front';

const worth = (valueCents: number, saveByAt: number | null, more = {}) =>
  aCallRow(1, {
    units: [
      {
        id: 'u',
        kind: 'upright-freezer',
        compartments: [
          {
            kind: 'freezer',
            valueCents,
            atRiskAt: NOW,
            earliestAt: NOW,
            likelyAt: saveByAt,
            saveByAt,
          },
        ],
      },
    ],
    ...more,
  });

describe('lossFront', () => {
  it('puts value into the hour in which it is lost', () => {
    const front = lossFront(
      [worth(100, NOW + 0.5 * HOUR_MS), worth(20, NOW + HOUR_MS), worth(3, NOW + 1.01 * HOUR_MS)],
      NOW,
    );
    expect(front.bars.slice(0, 2).map(({ cents }) => cents)).toEqual([120, 3]);
    expect([lostWithin(front, 1), lostWithin(front, 4)]).toEqual([120, 123]);
  });

  it('tells a long bar by the hour', () => {
    const bar = lossFront([worth(400, NOW + 14 * HOUR_MS)], NOW).bars.find(
      ({ cents }) => cents > 0,
    );
    expect(bar).toMatchObject({ fromHours: 12, toHours: 16, centsPerHour: 100 });
  });

  it('keeps every cent in exactly one place, and a duplicate in none', () => {
    const calls = [
      worth(1, NOW - HOUR_MS),
      worth(2, NOW + 3 * HOUR_MS),
      worth(4, NOW + 60 * HOUR_MS),
      worth(8, null),
      worth(16, NOW + HOUR_MS, { restoredAt: NOW - HOUR_MS }),
      worth(32, null, { restoredAt: NOW - HOUR_MS }),
      worth(64, NOW - 2 * HOUR_MS, { restoredAt: NOW - HOUR_MS }),
      worth(128, NOW + HOUR_MS, { state: 'duplicate' }),
    ];
    const front = lossFront(calls, NOW);
    expect(front).toMatchObject({ lostCents: 1 + 64, savedCents: 16 + 32, laterCents: 4 + 8 });
    expect(front.bars.reduce((sum, { cents }) => sum + cents, 0)).toBe(2);
  });
});
