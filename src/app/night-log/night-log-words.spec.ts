/** @jest-environment node */
import type { NightLogDto } from '@shared/contract/night-logs';
import { confidenceWords, isDoubtful, missingWords, resultWords } from './night-log-words';

const counts = (part: Partial<NightLogDto['counts']>): NightLogDto['counts'] => ({
  calls: 0,
  folded: 0,
  aside: 0,
  empty: 0,
  known: 0,
  ...part,
});
const aLog = (rowCount: number, part: Partial<NightLogDto['counts']>): NightLogDto =>
  ({ rowCount, counts: counts(part) }) as NightLogDto;

describe('the words of an import', () => {
  it('says what became of every row', () => {
    expect(
      resultWords(aLog(1200, { calls: 1000, folded: 150, aside: 1, known: 40, empty: 9 })),
    ).toBe(
      'Of 1,200 rows, 1,000 calls were taken, 150 rows joined another. ' +
        '1 row waits for a person. 40 rows were known already.',
    );
  });

  it('says that a log that comes again brings nothing new', () => {
    expect(resultWords(aLog(6, { known: 5, empty: 1 }))).toBe(
      'Nothing in it was new: all 5 rows were known already. Nothing has changed.',
    );
  });

  it('names what no column holds', () => {
    expect(missingWords(['phone', 'callerName', 'address', 'remarks'])).toBe('');
    expect(missingWords(['firstName', 'lastName', 'remarks'])).toBe(
      'No column holds the phone or the address.',
    );
  });

  it('asks for a look where the guess is weak, and never where a person decided', () => {
    expect([1, 0.6, 0.35, 0.2].map(confidenceWords)).toEqual([
      'Sure',
      'Likely',
      'Perhaps',
      'A guess',
    ]);
    expect([1, 0.6, 0.35, 0.2].map(isDoubtful)).toEqual([false, false, false, true]);
  });
});
