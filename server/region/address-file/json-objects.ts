import { UnreadableRegion } from '../unreadable-region';

/** More text than any address point has; a file without an end of an object is no address file. */
const LONGEST_OBJECT = 2_000_000;

export interface FoundObject {
  readonly text: string;
  /** Line of the file that it begins on, from 1. */
  readonly line: number;
}

interface Beginning {
  readonly line: number;
  readonly parts: string[];
  length: number;
}

/**
 * The objects of a JSON text that lie at one depth, each as text, without holding the whole: 0 for one
 * object after the other, 2 for the features of a GeoJSON FeatureCollection.
 */
export async function* jsonObjects(
  chunks: AsyncIterable<string>,
  depth: 0 | 2,
): AsyncGenerator<FoundObject> {
  /** What is open: braces and brackets. */
  const open: string[] = [];
  let isInText = false;
  let isEscaped = false;
  let line = 1;
  let began: Beginning | null = null;
  for await (const chunk of chunks) {
    let from = 0;
    for (let i = 0; i < chunk.length; i++) {
      const char = chunk.charCodeAt(i);
      if (char === NEWLINE) line++;
      if (isInText) {
        if (isEscaped) isEscaped = false;
        else if (char === BACKSLASH) isEscaped = true;
        else if (char === QUOTE) isInText = false;
      } else if (char === QUOTE) isInText = true;
      else if (char === OPEN_BRACE || char === OPEN_BRACKET) {
        const isWanted =
          char === OPEN_BRACE && open.length === depth && (depth === 0 || open[1] === '[');
        if (isWanted && !began) {
          began = { line, parts: [], length: 0 };
          from = i;
        }
        open.push(char === OPEN_BRACE ? '{' : '[');
      } else if (char === CLOSE_BRACE || char === CLOSE_BRACKET) {
        open.pop();
        if (began && open.length === depth) {
          began.parts.push(chunk.slice(from, i + 1));
          yield { text: began.parts.join(''), line: began.line };
          began = null;
        }
      }
    }
    if (!began) continue;
    began.parts.push(chunk.slice(from));
    began.length += chunk.length - from;
    if (began.length > LONGEST_OBJECT)
      throw new UnreadableRegion(
        `The address file is damaged at line ${began.line}: what begins there does not end.`,
      );
  }
  // The compiler takes `began` for null here, since it looks at one turn of the loop at a time.
  const unfinished = began as Beginning | null;
  if (unfinished || open.length > 0)
    throw new UnreadableRegion(
      `The address file ends in the middle of line ${unfinished?.line ?? line}. Fetch it again.`,
    );
}

const NEWLINE = 10;
const QUOTE = 34;
const OPEN_BRACKET = 91;
const BACKSLASH = 92;
const CLOSE_BRACKET = 93;
const OPEN_BRACE = 123;
const CLOSE_BRACE = 125;
