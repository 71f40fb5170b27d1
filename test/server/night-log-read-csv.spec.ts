import { stringify } from 'csv-stringify/sync';
import { parse } from 'csv-parse/sync';
import fc from 'fast-check';
import { readCsv } from '../../server/night-log/read-csv';
import { splitRecords } from '../../server/night-log/split-records';

const utf8 = (text: string): Uint8Array => new TextEncoder().encode(text);
const latin = (text: string): Uint8Array =>
  Uint8Array.from([...text].map((letter) => letter.charCodeAt(0)));
const cells = (bytes: Uint8Array): (readonly string[])[] =>
  readCsv(bytes).rows.map((row) => row.cells);

const HEADER = 'Time,Caller,Phone,Message';
const ROW = '2:15a,Wren Ashgrove,252-555-0142,fridge warm';

describe('readCsv', () => {
  it('reads UTF-8 with and without a byte order mark', () => {
    const text = `${HEADER}\n2:15a,Zoë Ñandú,252-555-0142,fridge`;
    expect(readCsv(utf8(text))).toMatchObject({
      encoding: 'utf-8',
      header: ['Time', 'Caller', 'Phone', 'Message'],
    });
    expect(readCsv(utf8(`\ufeff${text}`))).toMatchObject({
      encoding: 'utf-8-bom',
      header: ['Time', 'Caller', 'Phone', 'Message'],
    });
    expect(cells(utf8(`\ufeff${text}`))[0]?.[1]).toBe('Zoë Ñandú');
  });

  it('falls back to Windows-1252', () => {
    const bytes = latin(`${HEADER}\n2:15a,Zo\u00eb O\u0092Dell,252-555-0142,fridge`);
    expect(readCsv(bytes)).toMatchObject({ encoding: 'windows-1252' });
    expect(cells(bytes)[0]?.[1]).toBe('Zoë O’Dell');
  });

  it('reads each line of a mixed file as what it is, and says so', () => {
    const bytes = new Uint8Array([
      ...utf8(`${HEADER}\n2:15a,Zoë,252-555-0142,x\n`),
      ...latin('2:20a,Andr\u00e9,252-555-0143,y\n'),
    ]);
    const log = readCsv(bytes);
    expect(log.rows.map((row) => row.cells[1])).toEqual(['Zoë', 'André']);
    expect(log).toMatchObject({ encoding: 'mixed', notes: [expect.stringContaining('mixes')] });
  });

  it('mends letters that were encoded twice', () => {
    expect(cells(utf8(`${HEADER}\n2:15a,JosÃ© PeÃ±a,252-555-0142,itâ€™s warm`))[0]).toEqual([
      '2:15a',
      'José Peña',
      '252-555-0142',
      'it’s warm',
    ]);
  });

  it('reads UTF-16 from a spreadsheet', () => {
    const text = `\ufeff${HEADER.replace(/,/g, '\t')}\n${ROW.replace(/,/g, '\t')}`;
    const bytes = new Uint8Array(Buffer.from(text, 'utf16le'));
    expect(readCsv(bytes)).toMatchObject({ encoding: 'utf-16', delimiter: '\t' });
    expect(cells(bytes)).toEqual([ROW.split(',')]);
  });

  it.each([
    [',', ','],
    [';', ';'],
    ['\t', '\t'],
    ['|', '|'],
  ])('guesses the delimiter %p', (delimiter) => {
    const row = ['2:15a', 'Ashgrove, Wren', '252-555-0142', '12 Cape Loop Rd, Port Ness'];
    const text = [['Time', 'Caller', 'Phone', 'Address'], row, row, row]
      .map((line) =>
        line.map((cell) => (cell.includes(delimiter) ? `"${cell}"` : cell)).join(delimiter),
      )
      .join('\r\n');
    expect(readCsv(utf8(text))).toMatchObject({ delimiter });
    expect(cells(utf8(text))).toEqual([row, row, row]);
  });

  it('obeys a sep= line', () => {
    expect(readCsv(utf8(`sep=;\nTime;Caller;Phone\n2:15a;Wren;252-555-0142`))).toMatchObject({
      delimiter: ';',
      headerLine: 2,
      rows: [{ line: 3, cells: ['2:15a', 'Wren', '252-555-0142'] }],
    });
  });

  it('keeps quoted commas, doubled quotes and line breaks in one cell', () => {
    const log = readCsv(
      utf8(
        `${HEADER}\n2:15a,"Ashgrove, Wren",252-555-0142,"said ""hurry""\nhas insulin"\n${ROW}\n`,
      ),
    );
    expect(log.rows).toEqual([
      { line: 2, cells: ['2:15a', 'Ashgrove, Wren', '252-555-0142', 'said "hurry"\nhas insulin'] },
      { line: 4, cells: ROW.split(',') },
    ]);
  });

  it('never loses a call to a quote that nobody closed', () => {
    const log = cells(
      utf8(
        `${HEADER}\n2:15a,Wren,252-555-0142,"fridge warm\n2:20a,Ann,252-555-0143,"freezer"\n2:25a,"Bo,252-555-0144,ok\n${ROW}`,
      ),
    );
    expect(log.map((row) => row[0])).toEqual(['2:15a', '2:20a', '2:25a', '2:15a']);
  });

  it('takes inches and other stray quotes for letters', () => {
    expect(cells(utf8(`${HEADER}\n2:15a,Wren "Birdie" A,252-555-0142,18" fridge`))[0]).toEqual([
      '2:15a',
      'Wren "Birdie" A',
      '252-555-0142',
      '18" fridge',
    ]);
  });

  it('finds the titles below title lines, and keeps those', () => {
    const log = readCsv(utf8(`Night Desk\nCalls for 12/01/2026,,,\n\n${HEADER}\n${ROW}`));
    expect(log).toMatchObject({ headerLine: 4, header: HEADER.split(',') });
    expect(log.titles.map((title) => title.cells[0])).toEqual([
      'Night Desk',
      'Calls for 12/01/2026',
    ]);
  });

  it('knows a log without titles', () => {
    const log = readCsv(utf8(`${ROW}\n${ROW}`));
    expect(log.header).toBeNull();
    expect(log.rows).toHaveLength(2);
  });

  it('keeps empty and ragged rows', () => {
    expect(
      cells(utf8(`${HEADER}\n${ROW}\n,,,\n\n2:20a,Ann\n${ROW},extra,more\n`)).map(
        (row) => row.length,
      ),
    ).toEqual([4, 4, 1, 2, 6]);
  });

  it('closes a line break inside an unquoted message', () => {
    const log = readCsv(
      utf8(
        `Time,Caller,Phone,Message,Op\n2:15a,Wren,252-555-0142,fridge dead\nand has insulin,JB\n2:20a,Ann,252-555-0143,freezer,JB`,
      ),
    );
    expect(log.rows.map((row) => row.cells)).toEqual([
      ['2:15a', 'Wren', '252-555-0142', 'fridge dead\nand has insulin', 'JB'],
      ['2:20a', 'Ann', '252-555-0143', 'freezer', 'JB'],
    ]);
  });

  it('cuts a row again that was quoted as a whole', () => {
    expect(cells(utf8(`${HEADER}\n"2:15a,Wren,252-555-0142,""warm, wet"""\n${ROW}`))[0]).toEqual([
      '2:15a',
      'Wren',
      '252-555-0142',
      'warm, wet',
    ]);
  });

  it('reads files of one row, of titles only, and of nothing', () => {
    expect(readCsv(utf8(ROW)).rows).toHaveLength(1);
    expect(readCsv(utf8(HEADER))).toMatchObject({ header: HEADER.split(','), rows: [] });
    expect(readCsv(utf8(''))).toMatchObject({ header: null, rows: [] });
  });

  it('reads old line ends', () => {
    expect(cells(utf8(`${HEADER}\r${ROW}\r${ROW}`))).toHaveLength(2);
  });
});

describe('splitRecords', () => {
  it('reads whatever csv-stringify writes as csv-parse does', () => {
    const cell = fc.string({ unit: fc.constantFrom('a', 'é', '"', ',', '\n', ' ', ';', '7') });
    fc.assert(
      fc.property(
        fc.array(fc.array(cell, { minLength: 2, maxLength: 4 }), { minLength: 1, maxLength: 6 }),
        (rows) => {
          const text = stringify(rows, { quoted: true });
          const theirs: unknown = parse(text, { relax_column_count: true });
          expect(splitRecords(text, ',', 0).map((record) => record.cells)).toEqual(theirs);
        },
      ),
      { numRuns: 500, seed: 7 },
    );
  });
});
