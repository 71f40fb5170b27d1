/** @jest-environment node */
import type { CallDetail } from '@shared/contract/calls';
import { changesBetween } from './call-changes';

const clock = (at: number) => `t${at}`;

const aDetail = (
  part: Partial<CallDetail> = {},
  row: Partial<CallDetail['row']> = {},
): CallDetail =>
  ({
    row: {
      state: 'waiting',
      name: 'Ada Marsh',
      phone: '+12525550142',
      address: { text: '12 Tern Court', unitNo: '', lonLat: null, kind: 'unlocated' },
      claim: null,
      ...row,
    },
    powerOutAt: 1,
    powerBackAt: null,
    units: [{ id: 'u', kind: 'chest-freezer', compartments: [] }],
    phoneCheck: { answers: { fire: 'no' }, startedAt: null, concludedAt: null },
    remarks: [],
    ...part,
  }) as unknown as CallDetail;

describe('changesBetween', () => {
  it('says nothing about what stayed as it was', () => {
    expect(changesBetween(aDetail(), aDetail(), clock)).toEqual([]);
  });

  it('names each thing that another person changed, before and after', () => {
    const after = aDetail(
      { powerBackAt: 5, remarks: [{ at: 6, by: 'Tom Ebner', text: 'Rang again' }] },
      { state: 'planned', name: 'Ada Lund', claim: { userId: 'tom', name: 'Tom Ebner', until: 9 } },
    );
    expect(changesBetween(aDetail(), after, clock)).toEqual([
      'State: Waiting for a visit, now On a route',
      'Name: Ada Marsh, now Ada Lund',
      'Power back: still out, now t5',
      'Claimed by: nobody, now Tom Ebner',
      '1 new remark',
    ]);
  });

  it('counts the answers of the phone check that differ, given or taken back', () => {
    const after = aDetail({
      phoneCheck: { answers: { line: 'no' }, startedAt: null, concludedAt: null },
    });
    expect(changesBetween(aDetail(), after, clock)).toEqual([
      '2 answers of the phone check changed',
    ]);
  });

  it('tells a unit that was added from facts that were corrected', () => {
    const chest = aDetail().units[0]!;
    const second = { ...chest, id: 'v', kind: 'walk-in' } as typeof chest;
    expect(changesBetween(aDetail(), aDetail({ units: [chest, second] }), clock)).toEqual([
      'Units: Chest freezer, now Chest freezer, Walk-in',
    ]);
    const corrected = { ...chest, place: 'garage' };
    expect(changesBetween(aDetail(), aDetail({ units: [corrected] }), clock)).toEqual([
      'What is known of the units was changed',
    ]);
  });
});
