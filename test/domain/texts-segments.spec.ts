import fc from 'fast-check';
import { costlyCharacters, textLength } from '@shared/domain/texts/segments';

describe('textLength', () => {
  // 3GPP TS 23.038 6.2.1 and TS 23.040 9.2.3.24: 160 alone or 153 joined septets, 70 or 67 units.
  it.each([
    [0, 0],
    [1, 1],
    [160, 1],
    [161, 2],
    [306, 2],
    [307, 3],
    [459, 3],
    [460, 4],
  ])('takes %i plain letters as %i segments of GSM-7', (length, segments) => {
    expect(textLength('a'.repeat(length))).toEqual({ encoding: 'GSM-7', units: length, segments });
  });

  it.each([
    [70, 1],
    [71, 2],
    [134, 2],
    [135, 3],
  ])('takes %i letters outside GSM-7 as %i segments of UCS-2', (length, segments) => {
    expect(textLength('í'.repeat(length))).toEqual({ encoding: 'UCS-2', units: length, segments });
  });

  it.each(['^', '{', '}', '[', ']', '~', '\\', '|', '€'])(
    'counts the extension character %s as two septets',
    (character) => {
      expect(textLength(character)).toEqual({ encoding: 'GSM-7', units: 2, segments: 1 });
      expect(textLength(character.repeat(80)).segments).toBe(1);
      expect(textLength(character.repeat(81)).segments).toBe(2);
    },
  );

  it('moves an extension character whole into the next segment', () => {
    // 152 septets, a pair that does not fit the 153rd, and 152 more: 306 septets, yet three parts.
    expect(textLength(`${'a'.repeat(152)}€${'a'.repeat(152)}`).segments).toBe(3);
  });

  it('counts an emoji as two sixteen-bit units and turns the whole text into UCS-2', () => {
    expect(textLength('😀')).toEqual({ encoding: 'UCS-2', units: 2, segments: 1 });
    expect(textLength(`${'a'.repeat(68)}😀`).segments).toBe(1);
    expect(textLength(`${'a'.repeat(69)}😀`).segments).toBe(2);
  });

  it('keeps é, ñ, ¿ and ¡ in GSM-7 and says which letters do not fit', () => {
    expect(textLength('¿Llamó el técnico, señor? ¡Sí!').encoding).toBe('UCS-2');
    expect(costlyCharacters('¿Llamó el técnico, señor? ¡Sí!')).toEqual(['ó', 'í']);
    expect(textLength('¿Llama el técnico, señor?').encoding).toBe('GSM-7');
  });

  it('never counts fewer segments than the units need, nor a longer text as fewer', () => {
    const bodies = fc.string({ unit: fc.constantFrom('a', '€', 'í', '😀', ' '), maxLength: 400 });
    fc.assert(
      fc.property(bodies, fc.constantFrom('a', '€', 'í', '😀'), (body, more) => {
        const { encoding, units, segments } = textLength(body);
        const [alone, joined] = encoding === 'GSM-7' ? [160, 153] : [70, 67];
        const least = units === 0 ? 0 : units <= alone ? 1 : Math.ceil(units / joined);
        expect(segments).toBeGreaterThanOrEqual(least);
        expect(segments).toBeLessThanOrEqual(least + Math.ceil(least / 60) + 1);
        expect(textLength(body + more).segments).toBeGreaterThanOrEqual(segments);
      }),
    );
  });
});
