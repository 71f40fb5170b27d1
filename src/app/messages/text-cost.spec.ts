/** @jest-environment node */
import { dearWords, lengthWords, textCost } from './text-cost';

describe('what a text costs', () => {
  it('counts characters and segments without the blanks that are not sent', () => {
    expect(lengthWords(textCost('  On our way.  '))).toBe('11 characters, 1 segment');
    expect(lengthWords(textCost('   '))).toBe('');
  });

  // 3GPP TS 23.040: 160 septets fit alone, 153 each when joined; 70 and 67 for UCS-2.
  it.each([
    ['a'.repeat(160), 1],
    ['a'.repeat(161), 2],
    ['á'.repeat(70), 1],
    ['á'.repeat(71), 2],
  ])('bills %# by the published lengths', (body, segments) => {
    expect(textCost(body).segments).toBe(segments);
  });

  it('names the character that makes a text dearer, and what it would cost without', () => {
    expect(dearWords(textCost(`${'a'.repeat(80)} según`))).toBe(
      'Costs more because of “ú”: 2 segments instead of 1.',
    );
  });

  it('says nothing of a special character that costs nothing', () => {
    expect(dearWords(textCost('¿Está en casa?'))).toBe('');
    expect(dearWords(textCost('a'.repeat(200)))).toBe('');
  });
});
