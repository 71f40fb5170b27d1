import {
  FOOD_ROWS,
  FOOD_STORIES,
  foodAdvice,
  STORY_WORDS,
  VERDICT_WORDS,
  type FoodStory,
} from '@shared/domain/keep-or-discard';

const verdictOn = (code: string, story: FoodStory) =>
  FOOD_ROWS.find((row) => row.code === code)?.verdicts[story];

/**
 * FSIS news release of 8 February 2013: after 4 h without power discard meat, poultry, fish, soft
 * cheese, milk, eggs, leftovers and deli items. Rhode Island DOH prints the same list.
 */
describe('FOOD_ROWS against the FSIS list of perishables', () => {
  it.each(['meat', 'cured-meat', 'prepared', 'soft-cheese', 'dairy', 'eggs'])(
    'discards %s that was warm in the refrigerator',
    (code) => expect(verdictOn(code, 'warm-in-refrigerator')).toBe('discard'),
  );
});

/** FoodSafety.gov charts as copied by the press in 2023. */
describe('FOOD_ROWS against the FoodSafety.gov charts', () => {
  it.each(['hard-cheese', 'butter', 'fruit', 'raw-vegetables', 'condiments', 'bread'])(
    'keeps %s that was warm in the refrigerator',
    (code) => expect(verdictOn(code, 'warm-in-refrigerator')).toBe('keep'),
  );

  it.each(['meat', 'dairy', 'prepared', 'frozen-vegetables', 'bread'])(
    'lets %s with ice crystals be refrozen',
    (code) => expect(verdictOn(code, 'still-cold-in-freezer')).toBe('refreeze'),
  );

  it('discards ice cream even when it is still cold', () => {
    expect(verdictOn('ice-cream', 'still-cold-in-freezer')).toBe('discard');
  });

  it('gives opened mayonnaise 8 h above 50 F and frozen vegetables 6 h above 40 F', () => {
    expect(verdictOn('mayonnaise', 'warm-in-refrigerator')).toBe('discard-above-50-for-8-h');
    expect(verdictOn('frozen-vegetables', 'thawed')).toBe('discard-after-6-h');
  });
});

describe('FOOD_ROWS', () => {
  it('has one row for each code', () => {
    expect(new Set(FOOD_ROWS.map(({ code }) => code)).size).toBe(FOOD_ROWS.length);
  });

  it('is never kinder to thawed food than to food that is still cold', () => {
    const discarded = FOOD_ROWS.filter(
      (row) => row.verdicts['still-cold-in-freezer'] === 'discard',
    );
    expect(discarded.length).toBeGreaterThan(0);
    for (const row of discarded) expect(row.verdicts.thawed).toBe('discard');
  });

  it('discards whatever flood water or raw meat juice touched', () => {
    for (const story of FOOD_STORIES) expect(verdictOn('soiled', story)).toBe('discard');
  });

  it('never invites anyone to taste or smell', () => {
    const words = [
      ...FOOD_ROWS.flatMap(({ food, note }) => [food, note ?? '']),
      ...Object.values(STORY_WORDS),
      ...Object.values(VERDICT_WORDS),
    ].join(' ');
    expect(words).not.toMatch(/taste|smell/i);
  });
});

describe('foodAdvice', () => {
  it.each(FOOD_STORIES)(
    'lists for %s exactly the rows of which the chart says something',
    (story) => {
      const listed = foodAdvice(story);
      expect(listed).toHaveLength(FOOD_ROWS.filter((row) => row.verdicts[story] !== null).length);
      for (const { row, verdict } of listed) expect(verdict).toBe(row.verdicts[story]);
    },
  );
});
