import { readAddress } from '@shared/domain/night-log/address-text';
import { foldDuplicates, sameHousehold } from '@shared/domain/night-log/fold-duplicates';
import type { NightCall, NightUnit, RowReading } from '@shared/domain/night-log/night-call';

const NO_CELLS = { whole: '', number: '', street: '', unit: '', city: '', state: '', postcode: '' };

interface Said {
  name?: string;
  phone?: string;
  other?: string;
  at?: number;
  place?: string;
  remarks?: string;
  units?: readonly NightUnit[];
  insulin?: boolean;
  running?: boolean;
}

function call(said: Said): NightCall {
  const phone = (e164: string | undefined): { e164: string; extension: null }[] =>
    e164 ? [{ e164: `+1${e164}`, extension: null }] : [];
  return {
    name: said.name ?? null,
    business: null,
    phone: phone(said.phone)[0] ?? null,
    otherPhones: phone(said.other),
    address: said.place ? readAddress({ ...NO_CELLS, whole: said.place }) : null,
    receivedAt: said.at ?? 0,
    receivedAtIs: 'read',
    units: said.units ?? [],
    medicine: {
      mentioned: said.insulin ?? false,
      kinds: said.insulin ? ['insulin'] : [],
      words: [],
    },
    dangers: [],
    language: null,
    contents: '',
    remarks: said.remarks ?? '',
    powerOutAt: null,
    powerBackAt: null,
    powerStillOut: false,
    saysRunning: said.running ?? false,
    doubts: [],
  };
}

function fold(...said: Said[]): number[][] {
  return foldDuplicates(rows(said)).map((household) => household.rows.map(({ line }) => line));
}

const rows = (said: readonly Said[]): RowReading[] =>
  said.map((one, i) => ({
    line: i + 1,
    cells: [],
    key: String(i),
    result: { kind: 'understood', call: call({ at: i, ...one }) },
  }));

const unit = (kind: NightUnit['kind'], assumed = false): NightUnit => ({
  kind,
  compartments: [],
  said: kind,
  assumed,
});

describe('foldDuplicates', () => {
  it('folds the same phone, four times over', () => {
    const once = { phone: '2525550101', name: 'Wren Ashgrove', place: '12 Elder St' };
    expect(fold(once, { ...once, place: '' }, { ...once, name: 'ASHGROVE' }, once)).toEqual([
      [1, 2, 3, 4],
    ]);
  });

  it('folds the same address with another phone when the names agree', () => {
    expect(
      fold(
        { phone: '2525550101', name: 'Wren Ashgrove', place: '12 Elder St, Port Ness' },
        { phone: '2525550102', name: 'Toby Ashgrove', place: '12 ELDER STREET' },
      ),
    ).toEqual([[1, 2]]);
  });

  it('folds on a call-back number that stands in the message', () => {
    expect(fold({ phone: '2525550101' }, { phone: '2525550102', other: '2525550101' })).toEqual([
      [1, 2],
    ]);
  });

  it('keeps apartments of one house apart', () => {
    expect(
      fold(
        { phone: '2525550101', name: 'Wren Ashgrove', place: '12 Elder St Apt 1' },
        { phone: '2525550102', name: 'Daria Pell', place: '12 Elder St Apt 2' },
        { phone: '2525550103', name: 'Sol Keane', place: '12 Elder St' },
      ),
    ).toEqual([[1], [2], [3]]);
  });

  it('keeps a neighbour apart whose number stands in the message', () => {
    expect(
      fold(
        { phone: '2525550101', name: 'Wren Ashgrove', place: '12 Elder St' },
        { phone: '2525550102', other: '2525550101', name: 'Daria Pell', place: '80 Quay Row' },
      ),
    ).toEqual([[1], [2]]);
  });

  it('points at households that may be the same, and leaves them apart', () => {
    const households = foldDuplicates(
      rows([
        { phone: '2525550101', name: 'Wren Ashgrove', place: '12 Elder St' },
        { phone: '2525550101', name: 'Daria Pell', place: '80 Quay Row' },
      ]),
    );
    expect(households.map(({ maybe }) => maybe)).toEqual([
      [{ line: 2, reason: 'the same phone +12525550101, but another address' }],
      [{ line: 1, reason: 'the same phone +12525550101, but another address' }],
    ]);
  });

  it('does not chain two households through a row that fits both', () => {
    const groups = fold(
      { phone: '2525550101', name: 'Wren Ashgrove', place: '12 Elder St' },
      { phone: '2525550102', name: 'Daria Pell', place: '80 Quay Row' },
      { phone: '2525550101', other: '2525550102' },
    );
    expect(groups).toContainEqual([2]);
    expect(groups.flat()).toHaveLength(3);
  });

  it('does not take a switchboard for a household', () => {
    const lines = ['12 Elder St', '80 Quay Row', '7 Gull Loop', '3 Tern Way'];
    expect(
      fold(...lines.map((place, i) => ({ phone: `252555010${i}`, other: '2525550199', place }))),
    ).toEqual([[1], [2], [3], [4]]);
  });

  it('forgives a slip in the street', () => {
    expect(
      fold(
        { phone: '2525550101', name: 'Wren Ashgrove', place: '12 Heron Point Rd' },
        { phone: '2525550102', name: 'Wren Ashgrove', place: '12 Heorn Point Rd' },
      ),
    ).toEqual([[1, 2]]);
  });

  it('keeps everything that any row said', () => {
    const [household] = foldDuplicates(
      rows([
        {
          phone: '2525550101',
          at: 20,
          remarks: 'called again',
          units: [unit('fridge-freezer', true)],
          insulin: true,
        },
        {
          phone: '2525550101',
          at: 10,
          remarks: 'fridge warm',
          units: [unit('fridge-freezer', true)],
        },
        {
          phone: '2525550101',
          at: 30,
          remarks: 'freezer too',
          units: [unit('chest-freezer')],
          running: true,
        },
      ]),
    );
    expect(household?.rows.map(({ line }) => line)).toEqual([2, 1, 3]);
    expect(household?.call).toMatchObject({
      receivedAt: 10,
      remarks: 'fridge warm // called again // freezer too',
      medicine: { mentioned: true, kinds: ['insulin'] },
      saysRunning: true,
    });
    expect(household?.call.units.map(({ kind }) => kind)).toEqual([
      'fridge-freezer',
      'chest-freezer',
    ]);
  });

  it('takes "freezer" and "chest freezer" for one unit, the better said', () => {
    const [household] = foldDuplicates(
      rows([
        { phone: '2525550101', units: [unit('upright-freezer', true)] },
        { phone: '2525550101', units: [unit('chest-freezer')] },
      ]),
    );
    expect(household?.call.units.map(({ kind }) => kind)).toEqual(['chest-freezer']);
  });
});

describe('sameHousehold', () => {
  it('gives its reason', () => {
    expect(sameHousehold(call({ phone: '2525550101' }), call({ phone: '2525550101' }))).toEqual({
      same: 'yes',
      reason: 'the same phone +12525550101',
      firm: false,
    });
    expect(
      sameHousehold(call({ phone: '2525550101' }), call({ phone: '2525550102' })),
    ).toMatchObject({ same: 'no' });
  });
});
