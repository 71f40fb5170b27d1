/** @jest-environment node */
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import {
  changedContent,
  contentOf,
  draftOf,
  newDraft,
  setUntilNotice,
  typeEnd,
  typeStart,
} from './storm-road-draft';
import { spanWords, stormRoadChanges, tenseOf } from './storm-road-words';
import { readTimeAhead, readTimeAround } from './time-ahead';

const ZONE = 'America/New_York';
/** A Thursday, 14:30 in New York. */
const NOW = Date.UTC(2026, 8, 3, 18, 30);
const SHAPE = {
  type: 'line',
  points: [
    [-40, 34],
    [-40.01, 34],
  ] as [number, number][],
} as const;
const aRoad = (told: Partial<StormRoadDto> = {}): StormRoadDto => ({
  id: '7a3f3f0e-7f5e-4a53-9a3f-2f1a2b3c4d5e',
  stormId: '7a3f3f0e-7f5e-4a53-9a3f-2f1a2b3c4d5f',
  kind: 'closed',
  state: 'confirmed',
  name: 'Pell Bridge',
  notes: '',
  shape: { ...SHAPE },
  startsAt: NOW - HOUR_MS,
  endsAt: null,
  speedShare: null,
  by: 'Mara',
  at: NOW - HOUR_MS,
  liftedAt: null,
  canUndo: true,
  version: 0,
  ...told,
});

describe('a time to come', () => {
  it.each([
    ['in 3 h', 3 * HOUR_MS],
    ['in 90 min', 90 * MINUTE_MS],
    ['in 1 h 30 min', 90 * MINUTE_MS],
    ['in 2 days', 48 * HOUR_MS],
    ['18:00', 3.5 * HOUR_MS],
    // It is past nine in the morning: the next nine is tonight's.
    ['9:00', 6.5 * HOUR_MS],
    ['tomorrow 6:00 am', 15.5 * HOUR_MS],
    ['Fri 6a', 15.5 * HOUR_MS],
    ['Thu 2p', 7 * 24 * HOUR_MS - 0.5 * HOUR_MS],
  ])('%s is read as that', (text, ahead) => {
    expect(readTimeAhead(text, NOW, ZONE)).toEqual({ kind: 'moment', at: NOW + ahead });
  });

  it.each(['soon', 'yesterday 6:00', '25:00'])('%s is not', (text) => {
    expect(readTimeAhead(text, NOW, ZONE).kind).toBe('unreadable');
  });

  it('without a day is the nearest one where something may have begun already', () => {
    expect(readTimeAround('14:00', NOW, ZONE)).toEqual({
      kind: 'moment',
      at: NOW - 30 * MINUTE_MS,
    });
    expect(readTimeAround('15:00', NOW, ZONE)).toEqual({
      kind: 'moment',
      at: NOW + 30 * MINUTE_MS,
    });
    expect(readTimeAround('now', NOW, ZONE)).toEqual({ kind: 'moment', at: NOW });
    expect(readTimeAround('2 h ago', NOW, ZONE)).toEqual({ kind: 'moment', at: NOW - 2 * HOUR_MS });
    expect(readTimeAround('in 2 h', NOW, ZONE)).toEqual({ kind: 'moment', at: NOW + 2 * HOUR_MS });
  });
});

describe('a storm road as it is typed', () => {
  it('asks for what is missing, one thing at a time', () => {
    const blank = newDraft(NOW);
    expect(contentOf(blank, null)).toEqual({ problem: 'Pick the road first, or draw the area.' });
    expect(contentOf(blank, SHAPE)).toEqual({ problem: 'It needs a name.' });
    const named = { ...blank, name: 'Pell Bridge' };
    expect(contentOf(named, SHAPE)).toMatchObject({ content: { endsAt: null, startsAt: NOW } });
    expect(contentOf(setUntilNotice(named, false), SHAPE)).toEqual({
      problem: 'When does it end? Or tick "until further notice".',
    });
    expect(contentOf(typeEnd(named, 'some day', NOW, ZONE), SHAPE)).toMatchObject({
      problem: expect.stringContaining('Ends: Write it as') as string,
    });
    const backwards = typeEnd(typeStart(named, 'in 5 h', NOW, ZONE), 'in 2 h', NOW, ZONE);
    expect(contentOf(backwards, SHAPE)).toEqual({ problem: 'It ends before it begins.' });
  });

  it('has a speed only when it is slow, and says its bounds', () => {
    const named = { ...newDraft(NOW), name: 'Causeway' };
    expect(contentOf({ ...named, speedText: '40' }, SHAPE)).toMatchObject({
      content: { speedShare: null },
    });
    const slow = { ...named, kind: 'slow' as const };
    expect(contentOf({ ...slow, speedText: '40' }, SHAPE)).toMatchObject({
      content: { speedShare: 0.4 },
    });
    for (const speedText of ['', 'x', '0', '95', '-3'])
      expect(contentOf({ ...slow, speedText }, SHAPE)).toHaveProperty('problem');
  });

  it('sends nothing that was not changed', () => {
    const road = aRoad({ endsAt: NOW + HOUR_MS });
    const draft = draftOf(road, () => 'then');
    const read = contentOf({ ...draft, name: 'Pell Bridge, north' }, road.shape);
    expect('content' in read && changedContent(road, read.content)).toEqual({
      name: 'Pell Bridge, north',
    });
  });
});

describe('a storm road in words', () => {
  it('says whether drivers meet it now, later or no more', () => {
    expect(tenseOf(aRoad(), NOW)).toBe('now');
    expect(tenseOf(aRoad({ startsAt: NOW + 1 }), NOW)).toBe('later');
    expect(tenseOf(aRoad({ endsAt: NOW }), NOW)).toBe('over');
    expect(tenseOf(aRoad({ state: 'reported' }), NOW)).toBe('reported');
    expect(spanWords(aRoad(), NOW, ZONE)).toBe('until further notice');
    expect(spanWords(aRoad({ endsAt: NOW + HOUR_MS }), NOW, ZONE)).toBe('until 15:30');
    expect(
      spanWords(aRoad({ startsAt: NOW + HOUR_MS, endsAt: NOW + 2 * HOUR_MS }), NOW, ZONE),
    ).toBe('from 15:30 until 16:30');
    expect(spanWords(aRoad({ state: 'lifted', liftedAt: NOW - MINUTE_MS }), NOW, ZONE)).toBe(
      'lifted 14:29',
    );
    expect(spanWords(aRoad({ state: 'reported', by: 'Noor' }), NOW, ZONE)).toBe(
      'reported 13:30 by Noor, not confirmed',
    );
  });

  it('tells what somebody else has changed', () => {
    const after = aRoad({ kind: 'slow', speedShare: 0.4, endsAt: NOW, version: 1 });
    expect(stormRoadChanges(aRoad(), after, () => '14:30')).toEqual([
      'What it is: Closed, now Slow, 40 % of the usual speed',
      'Ends: until further notice, now 14:30',
    ]);
  });
});
