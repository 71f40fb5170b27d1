/** @jest-environment node */
import type { CallRow } from '@shared/contract/calls';
import { HOUR_MS } from '@shared/domain/instant';
import { DEFAULT_WEIGHING, rankedCall } from '../core/ranking';
import { aCallRow, NOW } from '../core/testing';
import { type CallMark, callMark, CallMarks, pressOf } from './call-mark';

type Compartment = CallRow['units'][number]['compartments'][number];

const aCompartment = (change: Partial<Compartment>): Compartment => ({
  kind: 'fresh-food',
  valueCents: 10_000,
  atRiskAt: NOW - HOUR_MS,
  earliestAt: NOW - HOUR_MS,
  likelyAt: NOW + HOUR_MS,
  saveByAt: NOW + 2 * HOUR_MS,
  ...change,
});

function markOf(compartments: readonly Compartment[], change: Partial<CallRow> = {}): CallMark {
  const [unit] = aCallRow(1).units;
  const call = aCallRow(1, { units: [{ ...unit!, compartments: [...compartments] }], ...change });
  const mark = callMark(rankedCall(call, NOW, DEFAULT_WEIGHING), NOW);
  if (!mark) throw new Error('The call has a place.');
  return mark;
}

describe('the mark of a call', () => {
  it('takes shape and letter from what is lost next', () => {
    const freezer = aCompartment({ kind: 'freezer', saveByAt: NOW + 20 * HOUR_MS });
    expect(markOf([freezer, aCompartment({})]).kind).toBe('fresh-food');
    const lost = aCompartment({ saveByAt: NOW - HOUR_MS });
    expect(markOf([lost, freezer]).kind).toBe('freezer');
  });

  it('takes them from medicine at risk, whatever else is lost sooner', () => {
    const medicine = aCompartment({ kind: 'medicine', saveByAt: NOW + 9 * HOUR_MS });
    expect(markOf([aCompartment({}), medicine])).toMatchObject({ kind: 'medicine', press: 'soon' });
  });

  it('passes over what is worth nothing', () => {
    const empty = aCompartment({ valueCents: 0, saveByAt: NOW + HOUR_MS / 2 });
    const freezer = aCompartment({ kind: 'freezer', saveByAt: NOW + 20 * HOUR_MS });
    expect(markOf([empty, freezer])).toMatchObject({ kind: 'freezer', press: 'later' });
  });

  it('is hollow when nothing is left to save, or when it is cold again', () => {
    expect(markOf([aCompartment({ saveByAt: NOW - 1 })]).press).toBe('none');
    expect(markOf([aCompartment({})], { restoredAt: NOW - 1 }).press).toBe('none');
  });

  it('is none without a place', () => {
    const call = aCallRow(1, {
      address: { text: 'by the old mill', unitNo: '', lonLat: null, kind: 'unlocated' },
    });
    expect(callMark(rankedCall(call, NOW, DEFAULT_WEIGHING), NOW)).toBeNull();
  });
});

describe('pressOf', () => {
  it.each([
    [3, 59, 'now'],
    [3, 60, 'soon'],
    [3, 239, 'soon'],
    [3, 240, 'later'],
    [3, null, 'later'],
    [1, null, 'soon'],
    [1, 30, 'now'],
    [4, 30, 'none'],
  ] as const)('says of lane %s with %s minutes left: %s', (lane, slackMinutes, press) => {
    expect(pressOf({ lane, slackMinutes })).toBe(press);
  });
});

describe('CallMarks', () => {
  it('keeps the mark of a row that stays, within the same minute', () => {
    const marks = new CallMarks();
    const ranked = [
      rankedCall(aCallRow(1), NOW, DEFAULT_WEIGHING),
      rankedCall(aCallRow(2), NOW, DEFAULT_WEIGHING),
    ];
    const before = marks.of(ranked, NOW);
    const changed = [ranked[0]!, rankedCall(aCallRow(2, { version: 2 }), NOW, DEFAULT_WEIGHING)];
    const after = marks.of(changed, NOW + 1000);
    expect(after[0]).toBe(before[0]);
    expect(after[1]).not.toBe(before[1]);
    expect(marks.of(ranked, NOW + 61_000)[0]).not.toBe(before[0]);
  });
});
