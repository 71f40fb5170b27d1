import { NO_WAY_SECONDS } from '@shared/domain/planner/problem';

/**
 * What JSON.parse makes of a problem, but with a square matrix of drives as one flat `Float64Array`, null as
 * `NO_WAY_SECONDS`.
 *
 * Of a problem with a thousand places nearly all is the matrix, and a million numbers made one by one and
 * thrown away again take longer than a short budget. Whatever is not plain is left to JSON.parse.
 *
 * @throws SyntaxError
 */
export function parseProblem(text: string): unknown {
  const from = text.length < SHORT ? -1 : matrixAt(text);
  const matrix = from < 0 ? null : new MatrixText(text, from).read();
  if (!matrix) return JSON.parse(text) as unknown;
  const rest = `${text.slice(0, from)}${JSON.stringify(PLACEHOLDER)}${text.slice(matrix.end)}`;
  const sent = parsedOrNull(rest) as { matrix: unknown; locations: unknown } | null;
  // What is broken, named twice or of another size is left to whoever says what is wrong with it.
  const isWhole =
    sent?.matrix === PLACEHOLDER &&
    typeof sent.locations === 'number' &&
    matrix.drives.length === sent.locations ** 2 &&
    (matrix.rows === 0 || matrix.rows === sent.locations);
  return isWhole ? { ...sent, matrix: matrix.drives } : (JSON.parse(text) as unknown);
}

function parsedOrNull(text: string): unknown {
  try {
    return JSON.parse(text) as unknown;
  } catch {
    return null;
  }
}

/** Characters; what is shorter is parsed in no time. */
const SHORT = 20_000;
const PLACEHOLDER = 'the drives, read apart';

const QUOTE = 34;
const COMMA = 44;
const POINT = 46;
const ZERO = 48;
const NINE = 57;
const OPEN = 91;
const BACKSLASH = 92;
const CLOSE = 93;
const OPEN_OBJECT = 123;
const CLOSE_OBJECT = 125;

const isSpace = (code: number): boolean => code === 32 || code === 10 || code === 13 || code === 9;

function afterSpace(codes: Buffer, at: number): number {
  while (isSpace(codes[at]!)) at++;
  return at;
}

/** A colon and the space around it. */
const AFTER = /[ \n\r\t]*:[ \n\r\t]*/y;

/** Where the value of the outermost object's "matrix" begins, or -1. */
function matrixAt(text: string): number {
  let depth = 0;
  for (let at = 0; at < text.length; at++) {
    const code = text.charCodeAt(at);
    if (code === OPEN || code === OPEN_OBJECT) depth++;
    else if (code === CLOSE || code === CLOSE_OBJECT) depth--;
    else if (code === QUOTE) {
      const from = at + 1;
      for (at = from; at < text.length && text.charCodeAt(at) !== QUOTE; at++) {
        if (text.charCodeAt(at) === BACKSLASH) at++;
      }
      if (depth !== 1 || at - from !== 6 || !text.startsWith('matrix', from)) continue;
      AFTER.lastIndex = at + 1;
      if (AFTER.test(text)) return AFTER.lastIndex;
    }
  }
  return -1;
}

/**
 * Whole numbers of so many digits are exact, and so are such powers of ten: one division then gives the number
 * nearest to what is written, as the language itself does.
 */
const MOST_DIGITS = 15;
const TENTHS = Array.from({ length: MOST_DIGITS + 1 }, (_, power) => Number(`1e${power}`));

/** A list of plain numbers and nulls, or of equally long lists of them. */
class MatrixText {
  private drives: Float64Array;
  private count = 0;
  /** One byte for each character: quicker to go through than a text. */
  private readonly codes: Buffer;

  constructor(
    private readonly text: string,
    private at: number,
  ) {
    this.codes = Buffer.from(text, 'latin1');
    // A drive, its tenths and its comma; where they are shorter the table grows.
    this.drives = new Float64Array(Math.ceil((text.length - at) / 6));
  }

  /** @returns null where anything is out of the ordinary; `rows` is 0 for one list of numbers */
  read(): { readonly drives: Float64Array; readonly rows: number; readonly end: number } | null {
    const { codes } = this;
    const from = this.at;
    if (codes[this.at]! !== OPEN) return null;
    const first = afterSpace(codes, this.at + 1);
    let rows = 0;
    if (codes[first]! !== OPEN) {
      if (!this.readList()) return null;
    } else {
      let width = 0;
      this.at = first;
      for (;;) {
        const before = this.count;
        if (!this.readList()) return null;
        if (rows++ === 0) width = this.count;
        else if (this.count - before !== width) return null;
        this.at = afterSpace(codes, this.at);
        const code = codes[this.at++]!;
        if (code === CLOSE) break;
        if (code !== COMMA) return null;
        this.at = afterSpace(codes, this.at);
      }
    }
    if (this.hasForeign(from, this.at)) return null;
    return { drives: this.drives.subarray(0, this.count), rows, end: this.at };
  }

  /** Reads one list of numbers; `at` then stands behind it. */
  private readList(): boolean {
    const { text, codes } = this;
    let { at, count, drives } = this;
    if (codes[at++]! !== OPEN) return false;
    for (;;) {
      let code = codes[at]!;
      while (isSpace(code)) code = codes[++at]!;
      if (count === drives.length) drives = this.grown();
      if (code >= ZERO && code <= NINE) {
        const begin = at;
        let digits = 0;
        let decimals = 0;
        while (code >= ZERO && code <= NINE) {
          digits = digits * 10 + code - ZERO;
          code = codes[++at]!;
        }
        // JSON knows no 007.
        if (at - begin > 1 && codes[begin]! === ZERO) return false;
        if (code === POINT) {
          const first = at + 1;
          code = codes[++at]!;
          while (code >= ZERO && code <= NINE) {
            digits = digits * 10 + code - ZERO;
            code = codes[++at]!;
          }
          decimals = at - first;
          if (decimals === 0) return false;
        }
        drives[count++] =
          at - begin > MOST_DIGITS ? Number(text.slice(begin, at)) : digits / TENTHS[decimals]!;
      } else if (text.startsWith('null', at)) {
        drives[count++] = NO_WAY_SECONDS;
        code = codes[(at += 4)]!;
      } else {
        return false;
      }
      while (isSpace(code)) code = codes[++at]!;
      at++;
      if (code === CLOSE) break;
      if (code !== COMMA) return false;
    }
    this.at = at;
    this.count = count;
    return true;
  }

  private grown(): Float64Array {
    const old = this.drives;
    this.drives = new Float64Array(2 * old.length + 1);
    this.drives.set(old);
    return this.drives;
  }

  /** Whether a letter that is none of those of JSON's numbers may have passed for one of them. */
  private hasForeign(from: number, to: number): boolean {
    const { text } = this;
    return Buffer.byteLength(text) !== text.length && /[^ -~\s]/.test(text.slice(from, to));
  }
}
