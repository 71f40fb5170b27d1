import { NO_WAY_SECONDS } from '@shared/domain/planner/problem';
import { parseProblem } from '../../server/plan-program/parse-problem';

/** Longer than what is parsed without a look at its matrix. */
const FILLER = 'x'.repeat(20_000);

function text(matrix: string, locations: number, after = ''): string {
  return `{"note": "a \\"matrix\\": [1]", "deep": {"matrix": [7]}, "locations": ${locations},
    "matrix" : ${matrix}, "filler": "${FILLER}"${after}}`;
}
const matrixOf = (sent: unknown): unknown => (sent as { matrix: unknown }).matrix;
const cells = (numbers: readonly string[]): string => `[${numbers.join(',')}]`;

describe('parseProblem', () => {
  it('reads drives as the language itself does, by rows or flat', () => {
    const size = 40;
    const written = Array.from({ length: size * size }, (_, i) =>
      i % 3 === 0
        ? String(Math.sqrt(i) * 977)
        : i % 3 === 1
          ? (i * 7.13).toFixed(i % 12)
          : String(i ** 3),
    );
    const expected = Float64Array.from(JSON.parse(cells(written)) as number[]);
    const rows = Array.from({ length: size }, (_, row) =>
      cells(written.slice(row * size, (row + 1) * size)),
    );
    expect(matrixOf(parseProblem(text(cells(written), size)))).toEqual(expected);
    expect(matrixOf(parseProblem(text(`[ ${rows.join(' ,\n ')} ]`, size)))).toEqual(expected);
  });

  it('takes null for no way, and short numbers without end', () => {
    const flat = text(`[${Array(2500).fill('0').join(',')}]`.replace('[0,0,', '[0,null,'), 50);
    const drives = matrixOf(parseProblem(flat)) as Float64Array;
    expect([drives.length, drives[0], drives[1]]).toEqual([2500, 0, NO_WAY_SECONDS]);
    expect({ ...(parseProblem(flat) as object), matrix: [] }).toEqual({
      ...(JSON.parse(flat) as object),
      matrix: [],
    });
  });

  it.each([
    ['a negative drive', '[0, -1, 1, 0]', 2],
    ['an exponent', '[0, 1e3, 1, 0]', 2],
    ['a word', '[0, "1", 1, 0]', 2],
    ['another size', '[0, 1, 1, 0]', 3],
    ['rows of several lengths', '[[0, 1, 1], [0]]', 2],
    ['no list', '7', 2],
    ['an empty list', '[]', 0],
    ['a list in a row', '[[0, [1]], [1, 0]]', 2],
  ])('leaves %s to JSON.parse', (_, matrix, locations) => {
    const sent = text(matrix, locations);
    expect(parseProblem(sent)).toEqual(JSON.parse(sent));
  });

  it('reads drives among names in other letters', () => {
    const sent = text('[0, 1.5, 1, 0]', 2, ', "name": "\u0131\u4e00"');
    expect(matrixOf(parseProblem(sent))).toEqual(Float64Array.of(0, 1.5, 1, 0));
  });

  it('takes the last of two matrices, as JSON.parse does', () => {
    const sent = text('[0, 1, 1, 0]', 2, ', "matrix": [0, 2, 2, 0]');
    expect(matrixOf(parseProblem(sent))).toEqual([0, 2, 2, 0]);
  });

  it.each([
    '[0, 01, 1, 0]',
    '[0, 1., 1, 0]',
    '[0, 1, 1, 0',
    '[0, 1,, 0]',
    '[0, 1, 1, 0,]',
    '[0 1]',
    '[0, \u0131, 1, 0]',
  ])('refuses %s', (matrix) => {
    expect(() => parseProblem(text(matrix, 2))).toThrow(SyntaxError);
  });
});
