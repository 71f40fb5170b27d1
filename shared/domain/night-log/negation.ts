const NEGATOR = new RegExp(
  String.raw`(?:^|[^a-z'])(?:` +
    [
      `no`,
      `not`,
      `non`,
      `w\\/?o`,
      `without`,
      `zero`,
      `neither`,
      `nor`,
      `den(?:ies|ied|y)`,
      `never (?:saw|smelled|had)`,
      `isn'?t`,
      `aren'?t`,
      `has no`,
      `have no`,
      `(?:does|do|did)(?: not|n'?t) (?:have|see|smell|use|take|need|hear|notice|keep|store)`,
      `(?:hasn|haven)'?t (?:any|got|seen|noticed|smelled)`,
      `sin`,
      `ni`,
      `no (?:hay|tiene|tengo|tienen|tenemos|usa)`,
      `ningun[ao]?`,
    ].join('|') +
    String.raw`)[ -]+(?:(?:any|the|known|visible|obvious|signs? of|smell of|sight of|a|his|her|their|other|refrigerated|de|olor a)[ -]+)*$`,
);
/** "no insulin left" or "no insulin yet" is a need, not an all-clear. */
const STILL_A_NEED =
  /^\s*(?:left|yet|back-?up|supply|replacement|refills?|until|problems?|issues?|spare|any ?more|to |since|unless|has |if )/;
const DENIED_AFTER =
  /^\s*(?:\(s\))?\s*(?:[?:=-]+\s*|is |are )?(?:no|none|n|n\/a|na|neg(?:ative)?|nope|denied|not seen|0)\s*(?:$|[.,;|)/\]])/;

/**
 * Whether a mention at `start`..`end` of a plain text is denied: "no insulin", "no meds or insulin",
 * "insulin: none". Anything unclear counts as a mention, because a needless question costs a minute and
 * a missed medicine costs more.
 *
 * @param listWord what may stand between the denial and the mention in "no X or Y"
 */
export function isDenied(text: string, start: number, end: number, listWord: RegExp): boolean {
  const after = text.slice(end);
  if (DENIED_AFTER.test(after)) return true;
  if (STILL_A_NEED.test(after)) return false;
  let before = text.slice(Math.max(0, start - 80), start);
  for (let steps = 0; steps < 4; steps++) {
    if (NEGATOR.test(before)) return true;
    // A comma or "and" may begin a new thought ("no power, insulin inside"), so only these carry on.
    const list = /([a-z' ]{2,24}?)\s*(?:\bor\b|\bnor\b|\bni\b|\bo\b|\/)\s*(?:any\s+)?$/.exec(
      before,
    );
    const word = list && new RegExp(`(?:${listWord.source})s?$`).exec(list[1] ?? '');
    if (!list || !word) return false;
    before = before.slice(0, list.index + (list[1] ?? '').length - word[0].length);
  }
  return false;
}
