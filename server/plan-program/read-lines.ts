/** Longer texts are refused: a string of the language holds half a gigabyte, and reading takes thrice that. */
export const MOST_BYTES = 256 * 2 ** 20;

const NEWLINE = 10;

/** A line that came in; `text` is null when it is longer than `MOST_BYTES`. */
export interface ReadLine {
  /** Counted from 1. */
  readonly number: number;
  readonly text: string | null;
  /** When it was complete, on the clock of `performance.now()`. */
  readonly at: number;
}

/** Lines as they come in, each as soon as it is complete. The last one needs no newline. */
export async function* readLines(
  input: AsyncIterable<Buffer>,
  mostBytes = MOST_BYTES,
): AsyncGenerator<ReadLine> {
  let number = 1;
  let pieces: Buffer[] = [];
  let bytes = 0;
  const add = (piece: Buffer): void => {
    bytes += piece.length;
    if (bytes <= mostBytes) pieces.push(piece);
    else pieces = [];
  };
  const take = (): ReadLine => {
    const at = performance.now();
    const text = bytes > mostBytes ? null : Buffer.concat(pieces).toString('utf8');
    pieces = [];
    bytes = 0;
    return { number: number++, text: text === null ? null : withoutMark(text), at };
  };
  for await (const chunk of input) {
    let from = 0;
    for (let end = chunk.indexOf(NEWLINE); end >= 0; end = chunk.indexOf(NEWLINE, from)) {
      add(chunk.subarray(from, end));
      yield take();
      from = end + 1;
    }
    if (from < chunk.length) add(chunk.subarray(from));
  }
  if (bytes > 0) yield take();
}

/** Everything that comes in; null when it is longer than `MOST_BYTES`. */
export async function readAll(
  input: AsyncIterable<Buffer>,
  mostBytes = MOST_BYTES,
): Promise<string | null> {
  const pieces: Buffer[] = [];
  let bytes = 0;
  for await (const chunk of input) {
    bytes += chunk.length;
    if (bytes > mostBytes) return null;
    pieces.push(chunk);
  }
  return withoutMark(Buffer.concat(pieces).toString('utf8'));
}

/** Some programs put a byte order mark before their text. */
const withoutMark = (text: string): string => (text.startsWith('\uFEFF') ? text.slice(1) : text);
