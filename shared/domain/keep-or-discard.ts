/**
 * What published guidance says about each kind of food after a cold unit has warmed.
 *
 * Source of every row unless it names another: FoodSafety.gov, "Food Safety During Power Outage",
 * refrigerator and freezer charts, as copied by the press (2012, 2023), NSF, University of Illinois
 * Extension and the University of Connecticut. The primary page is to be compared before the list is
 * printed for a customer. In our own words; when in doubt, throw it out.
 */

/** `refreeze-if-sound`: discard what shows mould or slime. */
export type Verdict =
  | 'keep'
  | 'discard'
  | 'refreeze'
  | 'refreeze-if-sound'
  | 'discard-after-6-h'
  | 'discard-above-50-for-8-h';

/** What happened to the food. */
export const FOOD_STORIES = ['warm-in-refrigerator', 'still-cold-in-freezer', 'thawed'] as const;
export type FoodStory = (typeof FOOD_STORIES)[number];

export const STORY_WORDS: Readonly<Record<FoodStory, string>> = {
  'warm-in-refrigerator': 'In the refrigerator, above 40 F for more than 2 hours',
  'still-cold-in-freezer': 'In the freezer, still with ice crystals or at 40 F or below',
  thawed: 'In the freezer, thawed and above 40 F for more than 2 hours',
};

export const VERDICT_WORDS: Readonly<Record<Verdict, string>> = {
  keep: 'Keep',
  discard: 'Discard',
  refreeze: 'Refreeze',
  'refreeze-if-sound': 'Refreeze, but discard with mould or slime',
  'discard-after-6-h': 'Discard after 6 hours above 40 F',
  'discard-above-50-for-8-h': 'Discard if above 50 F for more than 8 hours',
};

export interface FoodRow {
  readonly code: string;
  readonly food: string;
  /** null: the chart has no entry, so nothing may be said but "when in doubt, throw it out". */
  readonly verdicts: Readonly<Record<FoodStory, Verdict | null>>;
  /** Only where the row does not rest on the chart as a whole. */
  readonly note: string | null;
}

export const FOOD_ROWS: readonly FoodRow[] = [
  row('meat', 'Meat, poultry, fish and seafood, raw or cooked; soy substitutes', [
    'discard',
    'refreeze',
    'discard',
  ]),
  row('cured-meat', 'Lunch meat, hot dogs, bacon, sausage; hams that need cold; pizza', [
    'discard',
    'refreeze',
    'discard',
  ]),
  row('opened-cans', 'Opened canned meat or fish', ['discard', 'refreeze', 'discard']),
  row('prepared', 'Casseroles, soups, stews, gravy, stuffing; meat, fish and egg salads', [
    'discard',
    'refreeze',
    'discard',
  ]),
  row('soft-cheese', 'Soft, shredded and low-fat cheese; cheesecake', [
    'discard',
    'refreeze',
    'discard',
  ]),
  row('hard-cheese', 'Hard and processed cheese; grated cheese in a can or jar', [
    'keep',
    'refreeze',
    'refreeze',
  ]),
  row(
    'dairy',
    'Milk, cream, sour cream, yogurt, buttermilk, soy milk, eggnog',
    ['discard', 'refreeze', 'discard'],
    'Refrozen dairy may lose some texture',
  ),
  row('butter', 'Butter and margarine', ['keep', null, null]),
  row('formula', 'Baby formula, opened', ['discard', null, null]),
  row(
    'eggs',
    'Eggs in any form, custards, puddings, quiche',
    ['discard', 'refreeze', 'discard'],
    'In the freezer: egg products out of the shell',
  ),
  row('ice-cream', 'Ice cream and frozen yogurt', [null, 'discard', 'discard']),
  row('cut-fruit', 'Cut fruit; sliced or shredded coconut', ['discard', null, null]),
  row('fruit', 'Whole and dried fruit; opened fruit juice and canned fruit', [
    'keep',
    'refreeze',
    'refreeze-if-sound',
  ]),
  row(
    'frozen-vegetables',
    'Frozen vegetables and vegetable juice',
    [null, 'refreeze', 'discard-after-6-h'],
    'One university table discards them at once',
  ),
  row('raw-vegetables', 'Raw whole vegetables, mushrooms, herbs', ['keep', null, null]),
  row(
    'cut-vegetables',
    'Cut or washed greens, cooked vegetables, tofu, baked potatoes, garlic in oil',
    ['discard', null, null],
    'Detail of this row from memory; compare with the chart before printing it',
  ),
  row('mayonnaise', 'Opened mayonnaise, tartar sauce, horseradish', [
    'discard-above-50-for-8-h',
    null,
    null,
  ]),
  row('condiments', 'Nut butter, jelly, mustard, ketchup, olives, pickles, vinegar dressings', [
    'keep',
    null,
    null,
  ]),
  row('creamy-sauces', 'Fish and oyster sauce; opened creamy dressings and spaghetti sauce', [
    'discard',
    null,
    null,
  ]),
  row(
    'bread',
    'Bread, rolls, cakes, muffins, tortillas, waffles, fruit pies',
    ['keep', 'refreeze', 'refreeze'],
    'One university table discards thawed waffles and pancakes',
  ),
  row(
    'dough',
    'Dough; cooked pasta, rice and potato; cream-filled pastry; custard and cheese pies',
    ['discard', 'refreeze', 'discard'],
  ),
  row('soiled', 'Anything touched by raw meat juice or flood water', [
    'discard',
    'discard',
    'discard',
  ]),
];

/** The advice sheet for what happened: what to discard, what may be kept or refrozen. */
export const foodAdvice = (
  story: FoodStory,
): readonly { readonly row: FoodRow; readonly verdict: Verdict }[] =>
  FOOD_ROWS.flatMap((each) => {
    const verdict = each.verdicts[story];
    return verdict === null ? [] : [{ row: each, verdict }];
  });

function row(
  code: string,
  food: string,
  [refrigerated, cold, thawed]: readonly [Verdict | null, Verdict | null, Verdict | null],
  note: string | null = null,
): FoodRow {
  const verdicts = {
    'warm-in-refrigerator': refrigerated,
    'still-cold-in-freezer': cold,
    thawed,
  };
  return { code, food, verdicts, note };
}
