import { costlyCharacters, textLength } from '@shared/domain/texts/segments';
import { segmentWords } from './message-words';

/** The contract's limit on a text that a person writes, in UTF-16 units, as a field counts them. */
export const MOST_CHARACTERS = 480;

export interface TextCost {
  readonly characters: number;
  readonly segments: number;
  /** Characters that make it dearer than it would be without them; none when they cost nothing. */
  readonly dear: readonly string[];
  /** Segments with a plain character in the place of each of those. */
  readonly segmentsWithout: number;
}

/** What a text would be billed as, without the blanks at its ends that are not sent. */
export function textCost(written: string): TextCost {
  const body = written.trim();
  const { segments } = textLength(body);
  const special = costlyCharacters(body);
  const plain = [...body].map((one) => (special.includes(one) ? '?' : one)).join('');
  const segmentsWithout = textLength(plain).segments;
  const dear = segmentsWithout < segments ? special : [];
  return { characters: body.length, segments, dear, segmentsWithout };
}

/** `142 characters, 1 segment`. */
export const lengthWords = ({ characters, segments }: TextCost): string =>
  characters === 0
    ? ''
    : `${characters} ${characters === 1 ? 'character' : 'characters'}, ${segmentWords(segments)}`;

/** Why it costs more than it has to; empty when it does not. */
export function dearWords({ dear, segments, segmentsWithout }: TextCost): string {
  if (dear.length === 0) return '';
  const shown = dear.slice(0, 5).map((one) => `“${one}”`);
  const more = dear.length > shown.length ? ' and others' : '';
  return (
    `Costs more because of ${shown.join(', ')}${more}: ${segmentWords(segments)} ` +
    `instead of ${segmentsWithout}.`
  );
}
