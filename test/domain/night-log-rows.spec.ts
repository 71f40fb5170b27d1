import { alignRow } from '@shared/domain/night-log/align-row';
import { withRole } from '@shared/domain/night-log/column-map';
import { dayLine, whyEmpty } from '@shared/domain/night-log/empty-rows';
import { guessColumns, titlesIn } from '@shared/domain/night-log/guess-columns';
import { readName } from '@shared/domain/night-log/person-name';
import { rowKey, rowKeys } from '@shared/domain/night-log/row-key';

const HEADER = ['Time', 'Caller', 'Phone', 'Address', 'Appl', 'Msg'];
const ROWS = [
  [
    '9:15p',
    'Wren Ashgrove',
    '252-555-0101',
    '12 Elder St',
    'fridge',
    'not cold since the power came back',
  ],
  [
    '9:40p',
    'Daria Pell',
    '252-555-0102',
    '80 Quay Row',
    'chest freezer',
    'full of fish and venison, thawing',
  ],
  ['11:05p', 'Sol Keane', '252-555-0103', '7 Gull Loop', 'fridge', 'no light, breaker is fine'],
  ['12:20a', 'Bea Thorne', '252-555-0104', '3 Tern Way', 'freezer', 'clicks and then stops again'],
];
const MAP = guessColumns(HEADER, ROWS);

describe('guessColumns', () => {
  const roles = ['receivedTime', 'callerName', 'phone', 'address', 'unitKind', 'remarks'];

  it('knows the columns by title and cells', () => {
    expect(MAP.columns.map(({ role }) => role)).toEqual(roles);
    for (const { confidence, why } of MAP.columns) {
      expect(confidence).toBeGreaterThan(0.6);
      expect(why).toMatch(/titled/);
    }
  });

  it('knows them by their cells alone, with less confidence', () => {
    const map = guessColumns(null, ROWS);
    expect(map.columns.map(({ role }) => role)).toEqual(roles);
    map.columns.forEach(({ confidence }, i) =>
      expect(confidence).toBeLessThan(MAP.columns[i]?.confidence ?? 0),
    );
  });

  it('takes the only clock of a log without titles for when calls came in, newest first too', () => {
    const map = guessColumns(null, [...ROWS].reverse());
    expect(map.columns.map(({ role }) => role)).toEqual(roles);
  });

  it('never gives a share of nothing as the reason for a guess', () => {
    const rows = ROWS.map((row, i) => [`${i + 2} h`, ...row.slice(1, 5), 'no cold']);
    const { columns } = guessColumns(['Power out', ...HEADER.slice(1)], rows);
    expect(columns.map(({ role }) => role)).toContain('powerOutAt');
    expect(columns.map(({ why }) => why).join(' ')).not.toMatch(/\b0 %/);
  });

  it('knows them by their titles alone', () => {
    expect(guessColumns(HEADER, []).columns.map(({ role }) => role)).toEqual(roles);
  });

  it('believes the cells where a title misleads', () => {
    const map = guessColumns(
      ['Unit', 'Number', 'Caller', 'Time'],
      ROWS.map(([time = '', name = '', phone = '', , appliance = '']) => [
        appliance,
        phone,
        name,
        time,
      ]),
    );
    expect(map.columns.map(({ role }) => role)).toEqual([
      'unitKind',
      'phone',
      'callerName',
      'receivedTime',
    ]);
  });

  it('survives being stored', () => {
    expect(JSON.parse(JSON.stringify(MAP))).toEqual(MAP);
  });
});

describe('withRole', () => {
  it('lets a person decide, and gives no role twice', () => {
    const map = withRole(MAP, 1, 'phone');
    expect(map.columns[1]).toMatchObject({ role: 'phone', confidence: 1, why: 'set by hand' });
    expect(map.columns.filter(({ role }) => role === 'phone')).toHaveLength(1);
  });
});

describe('titlesIn', () => {
  it('counts titles, and none in a row of a call', () => {
    expect(titlesIn(HEADER)).toBe(6);
    for (const row of ROWS) expect(titlesIn(row)).toBe(0);
    expect(titlesIn(['Night desk', '', ''])).toBe(0);
  });
});

describe('alignRow', () => {
  const [first = []] = ROWS;

  it('leaves a row that fits alone', () => {
    expect(alignRow(first, MAP, ',')).toEqual({ cells: first, mended: null });
  });

  it('joins a message that held the delimiter', () => {
    const cells = [
      '9:15p',
      'Wren Ashgrove',
      '252-555-0101',
      '12 Elder St',
      'fridge',
      'warm',
      ' wet',
      ' please call',
    ];
    expect(alignRow(cells, MAP, ',').cells).toEqual([
      ...first.slice(0, 5),
      'warm, wet, please call',
    ]);
  });

  it('joins a name and a message in one row', () => {
    const cells = [
      '9:15p',
      'Ashgrove',
      ' Wren',
      '252-555-0101',
      '12 Elder St',
      'fridge',
      'warm',
      ' wet',
    ];
    expect(alignRow(cells, MAP, ',').cells).toEqual([
      '9:15p',
      'Ashgrove, Wren',
      ...first.slice(2, 5),
      'warm, wet',
    ]);
  });

  it('puts back a blank that was left out', () => {
    const cells = [
      '9:15p',
      '252-555-0101',
      '12 Elder St',
      'fridge',
      'warm since the power came back',
    ];
    expect(alignRow(cells, MAP, ',').cells).toEqual(['9:15p', '', ...cells.slice(1)]);
  });

  it('takes missing cells to be missing at the end', () => {
    expect(alignRow(first.slice(0, 4), MAP, ',')).toEqual({
      cells: [...first.slice(0, 4), '', ''],
      mended: null,
    });
  });
});

describe('whyEmpty', () => {
  it.each([
    [['', '', '']],
    [['---', '', '']],
    [['Page 2 of 5', '', '']],
    [['', 'page 3', '']],
    [['*** end of log ***']],
    [['Total calls: 41', '', '']],
    [['TOTAL', '41', '']],
    [['41 calls', '', '']],
    [['Printed 12/01/2026 07:10', '', '']],
    [['Harbor Bell Answering Service', '', '']],
    [['Tuesday, December 1, 2026', '', '']],
    [['Time', 'CALLER', 'Phone', 'Address', 'Appl', 'Msg']],
  ])('finds no call in %j', (cells) => {
    expect(whyEmpty(cells, HEADER)).not.toBeNull();
  });

  it.each([
    [['9:15p', 'Wren', '', '', '', '']],
    [['', '', '252-555-0101', '', '', '']],
    [['', '', '', '', '', 'has insulin']],
    [['*** utility says power by 6am ***']],
    [['', 'Paige Total', '252-555-0101', '', '', '']],
  ])('lets %j be looked at', (cells) => {
    expect(whyEmpty(cells, HEADER)).toBeNull();
  });

  it('reads the day of a line of its own', () => {
    expect(dayLine(['--- 12/01/2026 ---', ''])).toMatchObject({ first: 12, second: 1, year: 2026 });
    expect(dayLine(['9:15p'])).toBeNull();
  });
});

describe('rowKey', () => {
  it('does not change when a file is opened and saved', () => {
    expect(rowKey(['9:15p ', 'Wren  Ashgrove', '', ''])).toBe(rowKey(['9:15P', 'Wren Ashgrove']));
    expect(rowKey(['Zoe\u0308'])).toBe(rowKey(['Zoë']));
  });

  it('changes with any cell, and with where it stands', () => {
    const keys = [
      ['a', 'b'],
      ['b', 'a'],
      ['ab'],
      ['a', '', 'b'],
      ['', 'a', 'b'],
      ['a', 'b', 'c'],
    ].map((cells) => rowKey(cells));
    expect(new Set(keys).size).toBe(keys.length);
  });

  it('tells exact repeats apart by their turn, and gives the rest the same keys in a longer log', () => {
    const log = [['a'], ['b'], ['a']].map((cells, i) => ({ line: i + 1, cells }));
    const keys = rowKeys(log);
    expect(new Set(keys).size).toBe(3);
    expect(rowKeys([...log, { line: 4, cells: ['c'] }]).slice(0, 3)).toEqual(keys);
  });

  it('has no two of 40,000 rows share a key, nor any half of one', () => {
    const keys = Array.from({ length: 40_000 }, (_, i) =>
      rowKey([`${i % 13}:${i % 60}p`, `252-555-0${100 + (i % 100)}`, `row ${i}`]),
    );
    expect(new Set(keys).size).toBe(keys.length);
    // Sixty-four bits of a sound hash share nothing either among so few.
    expect(new Set(keys.map((key) => key.slice(0, 16))).size).toBe(keys.length);
    expect(new Set(keys.map((key) => key.slice(16))).size).toBe(keys.length);
    expect(keys[0]).toMatch(/^[0-9a-f]{32}$/);
  });
});

describe('readName', () => {
  it.each([
    ['Wren Ashgrove', 'Wren Ashgrove'],
    ['ASHGROVE, WREN', 'Wren Ashgrove'],
    ["O'QUILL, DARIA", "Daria O'Quill"],
    ['zoë d’arcy', 'Zoë D’Arcy'],
    ['Keller, Sam Jr.', 'Sam Keller Jr.'],
    ['Wren Ashgrove (daughter)', 'Wren Ashgrove'],
    ['Wren 252-555-0101', 'Wren'],
    ['Harbor Diner, Inc.', 'Harbor Diner, Inc.'],
    ['Mrs. Ashgrove', 'Mrs. Ashgrove'],
    ['unknown', null],
    ['?', null],
    ["wouldn't give name", null],
  ])('reads %p as %p', (raw, name) => {
    expect(readName(raw).name).toBe(name);
  });
});
