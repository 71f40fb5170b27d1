/** @jest-environment node */
import { HOUR_MS } from '@shared/domain/instant';
import { aCallRow, aTechnician, NOW } from '../core/testing';
import { whyUnplanned } from './why-unplanned';

const SHIFT = [{ startsAt: NOW - HOUR_MS, endsAt: NOW + 8 * HOUR_MS }];
const plain = aTechnician(1, { shifts: SHIFT });
const sealed = aTechnician(2, { shifts: SHIFT, skills: ['sealed-system'] });
const call = aCallRow(1);
const found = { callId: call.id, reason: 'capacity', words: 'No time left.' } as const;

describe('whyUnplanned', () => {
  it('asks for a place first: nothing else helps before', () => {
    const nowhere = aCallRow(2, { address: { ...call.address, lonLat: null } });
    expect(whyUnplanned(nowhere, [plain], NOW, found).reason).toBe('unlocated');
  });

  it('says that no open road leads there before it looks for anybody to drive', () => {
    const island = aCallRow(5, { cutOff: true, skills: ['sealed-system'] });
    expect(whyUnplanned(island, [plain], NOW, found)).toMatchObject({
      reason: 'cut-off',
      words: expect.stringContaining('closed or flooded') as string,
    });
  });

  it('names the skill that nobody at work has', () => {
    const needs = aCallRow(3, { skills: ['sealed-system'] });
    const away = { ...sealed, active: false };
    expect(whyUnplanned(needs, [plain, away], NOW, undefined)).toEqual({
      reason: 'skill',
      words: 'No technician has the skill: sealed system.',
    });
    expect(whyUnplanned(needs, [plain, sealed], NOW, undefined).reason).toBe('not-proposed');
  });

  it('says when nobody who may do it works any more', () => {
    const over = aTechnician(4, { shifts: [{ startsAt: NOW - 9 * HOUR_MS, endsAt: NOW - 1 }] });
    expect(whyUnplanned(call, [over], NOW, undefined).reason).toBe('no-shift');
  });

  it('passes on what the newest proposal found out', () => {
    expect(whyUnplanned(call, [plain], NOW, found)).toEqual({
      reason: 'capacity',
      words: 'No time left.',
    });
  });

  it('does not blame technicians when there are none', () => {
    expect(whyUnplanned(call, [], NOW, undefined).reason).toBe('not-proposed');
  });
});
