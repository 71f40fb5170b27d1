/** @jest-environment node */
import { areaCodeOf, groupedPhone, isAreaCodeAssumed, phoneOf, phoneTrouble } from './phone-entry';

describe('phoneOf', () => {
  it('knows a number only when all of it has been typed', () => {
    expect(phoneOf('252 555 014')).toBeNull();
    expect(phoneOf('252 555 0142')).toBe('+12525550142');
    expect(phoneOf('1 252 555 0142')).toBe('+12525550142');
  });

  it('completes seven digits by the area code of the company, and by nothing else', () => {
    expect(phoneOf('555-0142', '252')).toBe('+12525550142');
    expect(phoneOf('5550142')).toBeNull();
    expect(phoneOf('(910) 555-0142', '252')).toBe('+19105550142');
    expect(isAreaCodeAssumed('555-0142', '252')).toBe(true);
    expect(isAreaCodeAssumed('(910) 555-0142', '252')).toBe(false);
  });
});

describe('areaCodeOf', () => {
  it('is that of a number of the same plan', () => {
    expect(areaCodeOf('+12525550100')).toBe('252');
    expect(areaCodeOf('+442525550100')).toBeNull();
    expect(areaCodeOf(undefined)).toBeNull();
  });
});

describe('phoneTrouble', () => {
  it.each([
    ['5550142', null, /area code is missing/],
    ['555', '252', /^3 digits; a number has ten, or seven near here/],
    ['5', null, /^1 digit; a number has ten with the area code/],
    ['(152) 555-0142', '252', /can exist/],
    ['(252) 555-0142 cell', null, /without "cell"/],
    ['555-0142', '252', /^$/],
  ])('says of %p what to do', (typed, areaCode, words) => {
    expect(phoneTrouble(typed, areaCode)).toMatch(words);
  });
});

describe('groupedPhone', () => {
  it.each([
    ['555', '555'],
    ['5550', '555-0'],
    ['5550142', '555-0142'],
    ['25255501', '(252) 555-01'],
    ['2525550142', '(252) 555-0142'],
    ['1 252 555 0142', '1 252 555 0142'],
    ['+12525550142', '+12525550142'],
    ['252-555-0142 x7', '252-555-0142 x7'],
  ])('writes %p as %p', (typed, shown) => {
    expect(groupedPhone(typed)).toBe(shown);
  });
});
