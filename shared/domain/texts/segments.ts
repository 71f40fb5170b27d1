/**
 * How many segments a text is billed and carried as.
 *
 * Source: 3GPP TS 23.038 section 6.2.1 (the alphabet and its extension table) and 3GPP TS 23.040
 * section 9.2.3.24 (joined messages): 160 septets alone or 153 joined, 70 or 67 sixteen-bit units.
 */

const BASIC =
  '@£$¥èéùìòÇ\nØø\rÅåΔ_ΦΓΛΩΠΨΣΘΞÆæßÉ !"#¤%&\'()*+,-./0123456789:;<=>?' +
  '¡ABCDEFGHIJKLMNOPQRSTUVWXYZÄÖÑÜ§¿abcdefghijklmnopqrstuvwxyzäöñüà';
const EXTENSION = '\f^{}\\[~]|€';

/** Septets that each character takes: the extension table costs an escape more. */
const SEPTETS: ReadonlyMap<string, number> = new Map([
  ...[...BASIC].map((character) => [character, 1] as const),
  ...[...EXTENSION].map((character) => [character, 2] as const),
]);

export type TextEncoding = 'GSM-7' | 'UCS-2';

export interface TextLength {
  readonly encoding: TextEncoding;
  /** Septets in GSM-7, sixteen-bit units in UCS-2. */
  readonly units: number;
  readonly segments: number;
}

/** Characters of the text that GSM-7 cannot carry, each once: what makes a text dear. */
export function costlyCharacters(body: string): readonly string[] {
  return [...new Set([...body].filter((character) => !SEPTETS.has(character)))];
}

/** An empty text has no segments. */
export function textLength(body: string): TextLength {
  const characters = [...body];
  const isGsm = characters.every((character) => SEPTETS.has(character));
  const sizes = characters.map((character) =>
    // A character outside the basic plane, such as an emoji, is two sixteen-bit units.
    isGsm ? (SEPTETS.get(character) ?? 0) : character.length,
  );
  const units = sizes.reduce((sum, size) => sum + size, 0);
  const [alone, joined] = isGsm ? [160, 153] : [70, 67];
  return {
    encoding: isGsm ? 'GSM-7' : 'UCS-2',
    units,
    segments: units <= alone ? Math.min(units, 1) : packed(sizes, joined),
  };
}

/** A pair (escape and character, or two surrogates) is never torn: it moves to the next segment. */
function packed(sizes: readonly number[], capacity: number): number {
  let segments = 1;
  let used = 0;
  for (const size of sizes) {
    if (used + size > capacity) {
      segments += 1;
      used = 0;
    }
    used += size;
  }
  return segments;
}
