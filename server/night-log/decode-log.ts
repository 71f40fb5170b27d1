import type { NightLogFile } from '@shared/domain/night-log/log-file';

export interface DecodedLog {
  readonly text: string;
  readonly encoding: NightLogFile['encoding'];
  readonly notes: readonly string[];
}

const UTF8 = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true });

/**
 * Windows-1252 where it differs from Latin-1, bytes 0x80 to 0x9F (WHATWG Encoding Standard, index
 * windows-1252). Written out because Node 20's own decoder of that name gives Latin-1.
 */
const WINDOWS_HIGH =
  '\u20ac\u0081\u201a\u0192\u201e\u2026\u2020\u2021\u02c6\u2030\u0160\u2039\u0152\u008d\u017d\u008f' +
  '\u0090\u2018\u2019\u201c\u201d\u2022\u2013\u2014\u02dc\u2122\u0161\u203a\u0153\u009d\u017e\u0178';
const decodeWindows = (bytes: Uint8Array): string =>
  Buffer.from(bytes)
    .toString('latin1')
    .replace(/[\u0080-\u009f]/g, (letter) => WINDOWS_HIGH[letter.charCodeAt(0) - 0x80] ?? letter);

/** Bytes to text: UTF-8 when they are, else Windows-1252, which gives every byte a meaning. */
export function decodeLog(bytes: Uint8Array): DecodedLog {
  const notes: string[] = [];
  let text: string;
  let encoding: NightLogFile['encoding'];
  if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) {
    encoding = 'utf-8-bom';
    text = decodeLines(bytes.subarray(3), notes).text;
  } else if (bytes[0] === 0xff && bytes[1] === 0xfe) {
    encoding = 'utf-16';
    text = new TextDecoder('utf-16le').decode(bytes);
  } else if (bytes[0] === 0xfe && bytes[1] === 0xff) {
    encoding = 'utf-16';
    text = new TextDecoder('utf-16be').decode(bytes);
  } else if (looksLikeUtf16(bytes)) {
    encoding = 'utf-16';
    text = new TextDecoder('utf-16le').decode(bytes);
  } else {
    ({ text, encoding } = decodeLines(bytes, notes));
  }
  const mended = mendTwiceEncoded(text);
  if (mended !== text) notes.push('accented letters that had been encoded twice were mended');
  return { text: mended.replaceAll('\0', ''), encoding, notes };
}

/** Line by line, because a service's own form and a pasted message may differ within one file. */
function decodeLines(
  bytes: Uint8Array,
  notes: string[],
): { text: string; encoding: NightLogFile['encoding'] } {
  const whole = tryUtf8(bytes);
  if (whole !== null) return { text: whole, encoding: 'utf-8' };
  let text = '';
  let utf8Lines = 0;
  let start = 0;
  while (start < bytes.length) {
    const newline = bytes.indexOf(0x0a, start);
    const end = newline < 0 ? bytes.length : newline + 1;
    const line = bytes.subarray(start, end);
    const asUtf8 = tryUtf8(line);
    if (asUtf8 !== null && line.some((byte) => byte > 0x7f)) utf8Lines++;
    text += asUtf8 ?? decodeWindows(line);
    start = end;
  }
  if (utf8Lines > 0) {
    notes.push('the file mixes UTF-8 and Windows-1252; each line was read as what it is');
    return { text, encoding: 'mixed' };
  }
  return { text, encoding: 'windows-1252' };
}

function tryUtf8(bytes: Uint8Array): string | null {
  try {
    return UTF8.decode(bytes);
  } catch {
    // The one error that a fatal decoder throws: these bytes are not UTF-8.
    return null;
  }
}

function looksLikeUtf16(bytes: Uint8Array): boolean {
  const length = Math.min(bytes.length, 400);
  let zeros = 0;
  for (let i = 1; i < length; i += 2) if (bytes[i] === 0) zeros++;
  return length >= 8 && zeros > length * 0.35;
}

const TO_BYTE = new Map(
  Array.from(
    { length: 128 },
    (_, i) => [decodeWindows(Uint8Array.of(0x80 + i)), 0x80 + i] as const,
  ),
);

/** "JosÃ©" back to "José". */
function mendTwiceEncoded(text: string): string {
  if (!/[\u00c2\u00c3\u00e2]/.test(text)) return text;
  return text.replace(/[\u00c2\u00c3][\u0080-\uffff]|\u00e2[\u0080-\uffff]{2}/g, (garbled) => {
    const bytes = [...garbled].map((letter) => TO_BYTE.get(letter));
    if (bytes.some((byte) => byte === undefined)) return garbled;
    return tryUtf8(Uint8Array.from(bytes.filter((byte) => byte !== undefined))) ?? garbled;
  });
}
