import fc from 'fast-check';
import { ordinalOf, tokensOf } from '../../shared/domain/address/address-tokens';
import { parseAddress, waysToRead } from '../../shared/domain/address/parse-address';
import { isOnlyPostBox } from '../../shared/domain/address/post-box';
import { canonical, postalStreet, wordsOfStreet } from '../../shared/domain/address/street-words';

describe('parseAddress', () => {
  it.each([
    ['1210 N Heron St', '1210', 'n heron st'],
    ['1210 north heron street', '1210', 'n heron st'],
    ['heron st 1210', '1210', 'heron st'],
    ['1210 hwy 30', '1210', 'hwy 30'],
    ['hwy 30', null, 'hwy 30'],
    ['county road 7', null, 'county rd 7'],
    ['94 road', null, '94 rd'],
    ['94th rd', null, '94 rd'],
    ['218-09 94 road', '218-09', '94 rd'],
    ['218 - 09 94th Road', '218-09', '94 rd'],
    ['12a larch ct', '12a', 'larch ct'],
    ['12 1/2 larch ct', '12 1/2', 'larch ct'],
    ['third street 14', '14', '3 st'],
    ['1210 Hérön St', '1210', 'heron st'],
    ['12½ larch ct', '12 1/2', 'larch ct'],
    ['1210heron st', '1210', 'heron st'],
    ['heron st no. 12', '12', 'heron st'],
    ['12 no 3rd st', '12', 'n 3 st'],
    ["it's 1210 heron st", '1210', 'heron st'],
    ['my address is number 1210 heron st', '1210', 'heron st'],
    ['12 twenty-first st', '12', '21 st'],
    ['12 eighty third st', '12', '83 st'],
    ['12 21 st st', '12', '21 st'],
    ['1210 cr 7', '1210', 'county rd 7'],
    ['1210 heron ternhaven 00012', '1210', 'heron ternhaven'],
    ['1210 heron st near the old mill', '1210', 'heron st'],
  ])('reads %p as number %p on %p', (text, number, street) => {
    const parsed = parseAddress(text);
    expect(parsed.number).toBe(number);
    expect(parsed.street.join(' ')).toBe(street);
  });

  // Designators of USPS Publication 28, section 213.
  it.each([
    ['1210 n heron apt 4', 'Apt 4'],
    ['1210 n heron, Apt. 4B', 'Apt 4B'],
    ['1210 n heron #4', 'Unit 4'],
    ['1210 n heron apt #4', 'Apt 4'],
    ['1210 n heron apt4', 'Apt 4'],
    ['Apt 3, 1210 n heron st', 'Apt 3'],
    ['1210 n heron lot 12', 'Lot 12'],
    ['1210 n heron suite 200', 'Ste 200'],
    ['1210 n heron 2nd floor', 'Fl 2'],
    ['1210 n heron st basement', 'Bsmt'],
    ['1210 n heron apt no. 4', 'Apt 4'],
    ['#4 1210 n heron', 'Unit 4'],
    ['apartment 4, 1210 n heron', 'Apt 4'],
  ])('takes the unit off %p', (text, unit) => {
    const parsed = parseAddress(text);
    expect(parsed.unit).toBe(unit);
    expect(parsed.number).toBe('1210');
    expect(parsed.street.slice(0, 2)).toEqual(['n', 'heron']);
  });

  it('joins an address that a form has cut into three fields', () => {
    expect(parseAddress('1210, N Heron St, Ternhaven')).toMatchObject({
      number: '1210',
      street: ['n', 'heron', 'st'],
      tail: ['ternhaven'],
    });
    expect(parseAddress('1210 N Heron St, Ternhaven, 00010')).toMatchObject({
      postcode: '00010',
      tail: ['ternhaven'],
    });
  });

  it('takes the postcode at the end, with or without a comma', () => {
    expect(parseAddress('1210 n heron st ternhaven 00010').postcode).toBe('00010');
    expect(parseAddress('1210 n heron st, ternhaven 00010-1234').postcode).toBe('00010');
    expect(parseAddress('heron st 1210 00010')).toMatchObject({
      number: '1210',
      postcode: '00010',
    });
  });

  it.each([
    'heron & larch',
    'corner of heron and larch',
    'heron st at larch ave',
    'heron st / larch ave',
    'heron x larch',
  ])('reads %p as a corner', (text) => {
    const parsed = parseAddress(text);
    expect(parsed.street[0]).toBe('heron');
    expect(parsed.cross?.[0]).toBe('larch');
  });

  it('leaves other readings open, the plain one first', () => {
    const readings = (text: string): string[] =>
      waysToRead(text).map(({ number, street, unit }) =>
        [number ?? '-', street.join(' '), unit ?? ''].join('|'),
      );
    expect(readings('1210n heron')).toContain('1210|n heron|');
    expect(readings('218 09 94 road')).toContain('218-09|94 rd|');
    expect(readings('94 road 218-09')).toContain('218-09|94 rd|');
    expect(readings('heron 1210 ternhaven')).toContain('1210|heron ternhaven|');
    expect(readings('1210 heron at gullwick')).toContain('1210|heron gullwick|');
    expect(readings('12 a larch ct')).toContain('12a|larch ct|');
  });

  it('takes a part of a postcode, with its town', () => {
    expect(parseAddress('1210 heron st, ternhaven 0001')).toMatchObject({
      number: '1210',
      postcode: '0001',
      tail: ['ternhaven'],
    });
  });

  it('keeps the house beside a post box, and refuses the box alone', () => {
    expect(parseAddress('PO Box 12, 1210 Heron St')).toMatchObject({
      number: '1210',
      street: ['heron', 'st'],
      isPostBox: false,
    });
    for (const text of ['po box 12', 'P. O. Box 12, Ternhaven 00010', 'post office box 7', 'POB 3'])
      expect(isOnlyPostBox(text)).toBe(true);
    for (const text of ['12 Boxwood Ln', 'heron st 1210, po box 3'])
      expect(isOnlyPostBox(text)).toBe(false);
  });

  it('knows a post box, which nobody can visit', () => {
    expect(parseAddress('P.O. Box 12, Ternhaven').isPostBox).toBe(true);
    expect(parseAddress('12 Boxwood Ln').isPostBox).toBe(false);
  });

  it('takes whatever is typed without failing', () => {
    fc.assert(
      fc.property(fc.string({ maxLength: 80 }), (text) => {
        const parsed = parseAddress(text);
        expect(parsed.street.every((word) => word !== '')).toBe(true);
      }),
      { seed: 11, numRuns: 500 },
    );
  });
});

describe('ordinalOf', () => {
  it('reads all ordinals up to ninety-ninth, as English writes them', () => {
    expect(
      ['first', 'twelfth', 'thirteenth', 'twentieth', 'fortyfourth', 'ninetyninth'].map(ordinalOf),
    ).toEqual([1, 12, 13, 20, 44, 99]);
    expect(['twenty', 'heron', 'fortyheron', ''].map(ordinalOf)).toEqual([null, null, null, null]);
  });

  it('joins what is written in two words', () =>
    expect(tokensOf('Twenty-First and forty second')).toEqual(['21th', 'and', '42th']));
});

describe('canonical', () => {
  // Pairs of USPS Publication 28, appendices B and C1.
  it.each([
    ['street', 'st'],
    ['str', 'st'],
    ['avenue', 'ave'],
    ['av', 'ave'],
    ['boulevard', 'blvd'],
    ['highway', 'hwy'],
    ['causeway', 'cswy'],
    ['north', 'n'],
    ['southwest', 'sw'],
    ['94th', '94'],
    ['second', '2'],
    ['heron', 'heron'],
  ])('writes %p as %p', (word, short) => expect(canonical(word)).toBe(short));
});

describe('wordsOfStreet', () => {
  it('tells name, type and direction apart', () => {
    expect(wordsOfStreet(['n', 'heron', 'st'])).toEqual({
      names: ['heron'],
      types: ['st'],
      directions: ['n'],
    });
    expect(wordsOfStreet(['heron', 'st', 'sw'])).toEqual({
      names: ['heron'],
      types: ['st'],
      directions: ['sw'],
    });
  });

  it('leaves a name to streets that are called by a type or a direction', () => {
    expect(wordsOfStreet(['park', 'ave']).names).toEqual(['park']);
    expect(wordsOfStreet(['ave', 'n']).names.length).toBeGreaterThan(0);
    expect(wordsOfStreet(['hwy', '30']).names).toEqual(['30']);
  });
});

describe('postalStreet', () => {
  it.each([
    ['North Heron Street', 'N Heron St'],
    ['94th Road', '94th Rd'],
    ['Saint Alder Avenue', 'Saint Alder Ave'],
    ['Broadway', 'Broadway'],
    ['North Street', 'North St'],
    ['Onyx Creek Road', 'Onyx Creek Rd'],
    ['Avenue', 'Avenue'],
  ])('writes %p as %p', (long, short) => expect(postalStreet(long)).toBe(short));
});
