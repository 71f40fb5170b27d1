import fc from 'fast-check';
import { parsePhoneNumberFromString } from 'libphonenumber-js/min';
import { findPhones, formatPhone, readPhone } from '@shared/domain/phone-number';

const OURS = '+12525550142';

function e164(raw: string, areaCode: string | null = '252'): string | null {
  const reading = readPhone(raw, { areaCode });
  return reading.kind === 'number' ? reading.number.e164 : null;
}

describe('readPhone', () => {
  it.each([
    '(252) 555-0142',
    '(252)555-0142',
    '(252)555 - 0142',
    '252.555.0142',
    '252 555 0142',
    '252-555-0142',
    '252/555-0142',
    '252-5550142',
    '252 5550142',
    '2525550142',
    '12525550142',
    '+1 252 555 0142',
    '+12525550142',
    '1-252-555-0142',
    '1 (252) 555-0142',
    '001 252 555 0142',
    '0012525550142',
    'tel:+12525550142',
    '252\u2013555\u20130142',
    '252\u00a0555\u00a00142',
    '\u202a252-555-0142\u202c',
    '2 5 2 5 5 5 0 1 4 2',
    '252_555_0142',
    "'2525550142",
    '="2525550142"',
    '2525550142.0',
    '2.525550142E+09',
    '252-555-O142',
    '252-555-0l42',
    '252-555-0142 (cell)',
    'c: 252-555-0142',
    'call after 6: 252-555-0142',
    '252-555-0142 x12',
    '555-0142',
    '555 0142',
    '5550142',
    '555.0142',
  ])('reads %p as one number', (raw) => {
    expect(e164(raw)).toBe(OURS);
  });

  it.each([
    ['252-555-0142 x12', '12'],
    ['252-555-0142 ext. 4', '4'],
    ['(252) 555-0142, ext 301', '301'],
    ['2525550142x7', '7'],
    ['252-555-0142', null],
  ])('keeps the extension of %p', (raw, extension) => {
    expect(readPhone(raw)).toMatchObject({ number: { e164: OURS, extension } });
  });

  it('says when it took an area code for granted', () => {
    const reading = readPhone('555-0142', { areaCode: '252' });
    expect(reading).toMatchObject({ kind: 'number', doubts: [expect.stringContaining('252')] });
  });

  it('does not invent an area code', () => {
    expect(readPhone('555-0142')).toEqual({
      kind: 'unreadable',
      why: '"555-0142" has no area code',
    });
  });

  it('keeps the words beside the number', () => {
    expect(readPhone('call after 6: 252-555-0142')).toMatchObject({ rest: 'call after 6' });
    expect(readPhone('252-555-0142 ask for Wren')).toMatchObject({ rest: 'ask for Wren' });
    expect(readPhone('(252) 555-0142')).toMatchObject({ rest: '' });
  });

  it('finds a second number in the same cell', () => {
    expect(readPhone('H 252-555-0142 / W 252.555.0143')).toMatchObject({
      number: { e164: OURS },
      others: [{ e164: '+12525550143' }],
    });
  });

  it('hears the short second number', () => {
    expect(readPhone('252-555-0142 / 0143')).toMatchObject({
      number: { e164: OURS },
      others: [{ e164: '+12525550143' }],
      rest: '',
    });
  });

  it.each([
    '',
    '  ',
    'n/a',
    'none',
    '?',
    '--',
    'unknown',
    'no phone',
    'Refused',
    "didn't give one",
  ])('takes %p for no number', (raw) => {
    expect(readPhone(raw)).toEqual({ kind: 'blank' });
  });

  it.each(['BLOCKED', 'private', 'Restricted', 'No Caller ID', 'anonymous'])(
    'takes %p for a withheld number',
    (raw) => {
      expect(readPhone(raw)).toEqual({ kind: 'withheld' });
    },
  );

  it.each([
    ['252-555-014', '9 digits'],
    ['252-555-01422', '11 digits|cannot|can exist'],
    ['2.53E+09', 'spreadsheet'],
    ['152-555-0142', 'exist'],
    ['000-000-0000', 'exist'],
    ['9999999999', 'exist'],
    ['ask the neighbour', 'no phone number'],
    ['12/01/2026 6.49', '11 digits|exist'],
  ])('refuses %p and says why', (raw, why) => {
    const reading = readPhone(raw, { areaCode: null });
    expect(reading).toMatchObject({ kind: 'unreadable' });
    expect(reading.kind === 'unreadable' && reading.why).toMatch(new RegExp(why));
  });
});

describe('readPhone beside libphonenumber', () => {
  const spellings = [
    (a: string, b: string, c: string) => `(${a}) ${b}-${c}`,
    (a: string, b: string, c: string) => `+1 ${a} ${b} ${c}`,
    (a: string, b: string, c: string) => `${a}.${b}.${c}`,
    (a: string, b: string, c: string) => `${a}${b}${c}`,
  ];

  it('reads every number of the fictional range alike', () => {
    const area = fc.integer({ min: 200, max: 989 }).filter((code) => code % 100 !== 11);
    fc.assert(
      fc.property(
        area,
        fc.integer({ min: 0, max: 99 }),
        fc.constantFrom(...spellings),
        (a, line, spell) => {
          const raw = spell(String(a), '555', `01${String(line).padStart(2, '0')}`);
          const theirs = parsePhoneNumberFromString(raw, 'US');
          expect(theirs?.isPossible()).toBe(true);
          expect(e164(raw, null)).toBe(theirs?.number);
        },
      ),
      { numRuns: 400, seed: 3 },
    );
  });
});

describe('findPhones', () => {
  it('finds the numbers of a message and nothing else', () => {
    expect(
      findPhones('Out since 9:15 12/01/2026, 27999-1234. Try neighbor 252-555-0150 or 555-0151', {
        areaCode: '252',
      }),
    ).toEqual([
      { e164: '+12525550150', extension: null },
      { e164: '+12525550151', extension: null },
    ]);
  });
});

describe('formatPhone', () => {
  it('writes a number as its country does', () => {
    expect(formatPhone(OURS)).toBe('(252) 555-0142');
  });
});
