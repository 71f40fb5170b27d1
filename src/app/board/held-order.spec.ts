/** @jest-environment node */
import { EMPTY_ORDER, heldWords, holdOrder, nextOrder, takeOrder } from './held-order';

describe('nextOrder', () => {
  it('follows the live order while nobody reads', () => {
    expect(nextOrder(takeOrder(['a', 'b']), ['b', 'c', 'a'], false)).toEqual(
      takeOrder(['b', 'c', 'a']),
    );
  });

  it('moves no row while somebody reads, whatever happens meanwhile', () => {
    const shown = takeOrder(['a', 'b', 'c', 'd']);
    const held = nextOrder(shown, ['x', 'd', 'c', 'y', 'a'], true);
    expect(held.ids).toEqual(['a', 'b', 'c', 'd']);
    expect(held).toMatchObject({ newer: 2, gone: 1 });
  });

  it('takes the first rows even under a resting pointer, for nothing can jump yet', () => {
    expect(nextOrder(EMPTY_ORDER, ['a'], true)).toEqual(takeOrder(['a']));
  });

  it('takes the live order as soon as the reader has gone', () => {
    const held = nextOrder(takeOrder(['a', 'b']), ['b', 'a'], true);
    expect(nextOrder(held, ['b', 'a'], false)).toEqual(takeOrder(['b', 'a']));
  });
});

describe('holdOrder', () => {
  it('counts only the rows that really moved, not those that were pushed aside', () => {
    expect(holdOrder(['a', 'b', 'c', 'd'], ['d', 'a', 'b', 'c']).moved).toBe(1);
    expect(holdOrder(['a', 'b', 'c', 'd'], ['new', 'a', 'b', 'c', 'd']).moved).toBe(0);
    expect(holdOrder(['a', 'b', 'c'], ['c', 'b', 'a']).moved).toBe(2);
  });

  it('counts 3,000 rows turned upside down: one stays, the others moved', () => {
    const shown = Array.from({ length: 3000 }, (_, i) => `call-${i}`);
    expect(holdOrder(shown, [...shown].reverse()).moved).toBe(2999);
  });
});

describe('heldWords', () => {
  it('says what waits and which key takes it', () => {
    expect(heldWords({ ids: [], newer: 5, gone: 0, moved: 0 })).toBe(
      '5 newer: press U to take the new order',
    );
    expect(heldWords({ ids: [], newer: 5, gone: 1, moved: 2 })).toBe(
      '5 newer, 2 moved, 1 gone: press U to take the new order',
    );
  });

  it('says nothing when the order is the live one', () => {
    expect(heldWords(takeOrder(['a']))).toBe('');
  });
});
