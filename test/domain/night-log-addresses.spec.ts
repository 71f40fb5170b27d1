import {
  addressKey,
  findAddress,
  looksLikeAddress,
  readAddress,
} from '@shared/domain/night-log/address-text';

const NONE = { whole: '', number: '', street: '', unit: '', city: '', state: '', postcode: '' };

function shown(cells: Partial<typeof NONE>, cities: string[] = []): string {
  const a = readAddress({ ...NONE, ...cells }, cities);
  return a
    ? [a.number, a.street, a.unitNo, a.city, a.state, a.postcode]
        .map((part) => part ?? '-')
        .join('|')
    : 'none';
}

describe('readAddress', () => {
  it.each([
    ['12 Cape Loop Rd', '12|Cape Loop Rd|-|-|-|-'],
    ['12 Cape Loop Rd, Port Ness', '12|Cape Loop Rd|-|Port Ness|-|-'],
    ['12 Cape Loop Rd, Port Ness 27999', '12|Cape Loop Rd|-|Port Ness|-|27999'],
    ['12 Cape Loop Rd, Port Ness, NC 27999', '12|Cape Loop Rd|-|Port Ness|NC|27999'],
    ['12 Cape Loop Rd Port Ness NC 27999-1234', '12|Cape Loop Rd|-|Port Ness|NC|27999-1234'],
    ['12 CAPE LOOP RD, PORT NESS', '12|Cape Loop Rd|-|Port Ness|-|-'],
    ['12 cape loop road port ness', '12|Cape Loop Road|-|Port Ness|-|-'],
    ['12 Cape Loop Rd Apt 4B, Port Ness', '12|Cape Loop Rd|4B|Port Ness|-|-'],
    ['12 Cape Loop Rd, Apt. #4B, Port Ness', '12|Cape Loop Rd|4B|Port Ness|-|-'],
    ['12 Cape Loop Rd #4B', '12|Cape Loop Rd|4B|-|-|-'],
    ['12 Cape Loop Rd 4B', '12|Cape Loop Rd|4B|-|-|-'],
    ['12 Cape Loop Rd, 4B, Port Ness', '12|Cape Loop Rd|4B|Port Ness|-|-'],
    ['Apt 4B, 12 Cape Loop Rd', '12|Cape Loop Rd|4B|-|-|-'],
    ['12 Cape Loop Rd unit 3 Port Ness', '12|Cape Loop Rd|3|Port Ness|-|-'],
    ['12 Cape Loop Rd Lot 12', '12|Cape Loop Rd|12|-|-|-'],
    ['12 Cape Loop Rd\nPort Ness', '12|Cape Loop Rd|-|Port Ness|-|-'],
    ['12, Cape Loop Rd, Port Ness', '12|Cape Loop Rd|-|Port Ness|-|-'],
    ['12 Cape Loop Rd (blue house)', '12|Cape Loop Rd|-|-|-|-'],
    ['Harbour Diner, 12 Cape Loop Rd', '12|Cape Loop Rd|-|-|-|-'],
    ['Cape Loop Rd 12', '12|Cape Loop Rd|-|-|-|-'],
    ['218-09 Cape Loop Rd', '218-09|Cape Loop Rd|-|-|-|-'],
    ['12B Cape Loop Rd', '12B|Cape Loop Rd|-|-|-|-'],
    ['4410 Hwy 12', '4410|Hwy 12|-|-|-|-'],
    ['4410 Hwy 12 N Port Ness', '4410|Hwy 12 N|-|Port Ness|-|-'],
    ["7 St Brannoc's Way, Port Ness", "7|St Brannoc's Way|-|Port Ness|-|-"],
    ['9 Sandy Point Farm Rd', '9|Sandy Point Farm Rd|-|-|-|-'],
    ['9 Mill Run Rd Harbor Point', '9|Mill Run Rd|-|Harbor Point|-|-'],
    ['31 N Elder St E', '31|N Elder St E|-|-|-|-'],
    ['corner of Elder St and Cape Loop', '-|corner of Elder St and Cape Loop|-|-|-|-'],
    ['unknown', 'none'],
    ['n/a', 'none'],
    ['', 'none'],
  ])('cuts %p into %p', (whole, expected) => {
    expect(shown({ whole })).toBe(expected);
  });

  it('knows the towns it is told', () => {
    expect(shown({ whole: '12 The Strand Lower Ness' }, ['Lower Ness'])).toBe(
      '12|The Strand|-|Lower Ness|-|-',
    );
  });

  it.each([
    [
      { number: '12', street: 'Cape Loop Rd', city: 'Port Ness' },
      '12|Cape Loop Rd|-|Port Ness|-|-',
    ],
    [{ number: '12', street: '12 Cape Loop Rd' }, '12|Cape Loop Rd|-|-|-|-'],
    [{ number: '12.0', street: 'Cape Loop Rd', unit: 'Apt 4b' }, '12|Cape Loop Rd|4B|-|-|-'],
    [
      { whole: '12 Cape Loop Rd', unit: '#3', city: 'PORT NESS', postcode: "'27999" },
      '12|Cape Loop Rd|3|Port Ness|-|27999',
    ],
    [
      { whole: '12 Cape Loop Rd, Port Ness', city: 'Port Ness', state: 'nc' },
      '12|Cape Loop Rd|-|Port Ness|NC|-',
    ],
    [{ whole: 'Cape Loop Rd', number: '12' }, '12|Cape Loop Rd|-|-|-|-'],
    [{ city: 'Port Ness' }, '-|-|-|Port Ness|-|-'],
    [
      { whole: '12 Cape Loop Rd', city: 'Port Ness, NC 27999' },
      '12|Cape Loop Rd|-|Port Ness|NC|27999',
    ],
  ])('joins %j into %p', (cells, expected) => {
    expect(shown(cells)).toBe(expected);
  });

  it('keeps what stands beside the address', () => {
    expect(
      readAddress({ ...NONE, whole: 'Harbour Diner, 12 Cape Loop Rd (blue house)' })?.note,
    ).toBe('blue house; Harbour Diner');
  });
});

describe('addressKey', () => {
  it('is the same for two ways of writing one address', () => {
    const keys = ['12 Cape Loop Rd', '12 CAPE LOOP ROAD', '12 Cape Lp. Rd.'].map((whole) => {
      const address = readAddress({ ...NONE, whole });
      return address && addressKey(address);
    });
    expect(new Set(keys)).toEqual(new Set(['12 cape loop rd']));
  });
});

describe('findAddress', () => {
  it('finds an address in a message', () => {
    expect(findAddress('pls go to 12 Cape Loop Rd apt 3, back door, fridge dead')).toMatchObject({
      number: '12',
      street: 'Cape Loop Rd',
      unitNo: '3',
    });
    expect(findAddress('fridge 12 yrs old, dead since 9')).toBeNull();
  });
});

describe('looksLikeAddress', () => {
  it.each(['12 Cape Loop Rd', '218-09 Elder Ave, Port Ness'])('holds for %p', (text) => {
    expect(looksLikeAddress(text)).toBe(true);
  });
  it.each(['12', '252-555-0142', '2:15a', 'Port Ness', '12/01/2026 2:15', '2 fridges'])(
    'fails for %p',
    (text) => {
      expect(looksLikeAddress(text)).toBe(false);
    },
  );
});
