import type { UnitKind } from '../cold-unit';

/** How a word names a unit: exactly, or by a plain word that leaves the kind open. */
export type UnitFamily = UnitKind | 'plain-fridge' | 'plain-freezer';

/**
 * What a plain word is taken for until somebody asks.
 *
 * Most household refrigerators have a freezer part, and an upright loses more cold per opened door
 * than a chest; each is the reading under which nothing that thaws goes unseen (common practice, no
 * source).
 */
export const ASSUMED_KIND = {
  'plain-fridge': 'fridge-freezer',
  'plain-freezer': 'upright-freezer',
} as const satisfies Record<string, UnitKind>;

const FRIDGE = String.raw`(?:fridges?|fridg|frigde|frige|firdge|frdge|frigs?|fri?dgs?|refri(?:d?ge?r+[ae]t[oe]rs?|dge?s?|gs?|g\.)|refr\b\.?|r?frigerators?|reefers?|ice ?box(?:es)?|neveras?|refris?|refrigerador(?:es)?|heladeras?|frigorificos?|frigos?)`;
const FREEZER = String.raw`(?:freezers?|freezr?s?|frezz?ers?|freesers?|freazers?|frzr?s?|frzers?|fzrs?|frzrs?|freez|congelador(?:es)?|conjelador|frizer)`;
const FREEZE = String.raw`(?:${FREEZER}|freezes?)`;
const COLD = String.raw`(?:${FRIDGE}|${FREEZER}|coolers?|cases?|units?)`;

/** In order: the first that fits a stretch of text keeps it. */
export const UNIT_PATTERNS: readonly { family: UnitFamily | 'no-unit'; pattern: RegExp }[] = [
  // Words that only sound like a unit.
  {
    family: 'no-unit',
    pattern: new RegExp(
      String.raw`\b(?:freezer (?:burn\w*|bags?|paper|tape)|ice ?makers?|(?:ice )?chests? of drawers|not (?:the|a|my) (?:${FRIDGE}|${FREEZER})|(?:no|sin) (?:other |second |separate |stand ?alone )?(?:${FRIDGE}|${FREEZER}))\b`,
      'g',
    ),
  },
  // The freezer of a fridge is not a second unit.
  {
    family: 'fridge-freezer',
    pattern: new RegExp(
      String.raw`\b(?:${FRIDGE} ?(?:\/|-|w\/|with|c\/|con) ?(?:a |the |un )?(?:top |bottom |upper |lower |bot )?(?:mount )?${FREEZE}(?: (?:on (?:top|bottom)|combos?|combination))?|${FRIDGE} ${FREEZER}(?: combos?| combination)?|${FREEZER} ?\/ ?${FRIDGE}|combo(?:s|ination)?(?: (?:units?|${FRIDGE}))?|(?:side ?-?(?:by|x)-? ?side|sxs|s\/s)(?: (?:${FRIDGE}|unit))?|french ?-?doors?(?: ${FRIDGE})?|(?:top|bottom|bot|btm)[ -]?(?:mount|freezer|frzr)(?: ${FRIDGE})?|(?:double|two|2)[ -]?door(?: ${FRIDGE})|${FRIDGE},? (?:and|&|\+|,|y) (?:its |the )?${FREEZER} (?:parts?|sections?|compartments?|sides?|drawers?|on top|on bottom|combo)|both (?:sides|sections|compartments)|(?:${FRIDGE}) \((?:with|w\/) ${FREEZER}\))(?![a-z])`,
      'g',
    ),
  },
  {
    family: 'medicine-fridge',
    pattern: new RegExp(
      String.raw`\b(?:(?:med(?:s|ical|ication|icine)?|vacc?ines?|vax|pharm(?:acy|a|aceutical)?|insulin|lab|drug|specimen|rx|biologics?)[ /-]+(?:storage )?(?:mini[ -]?)?(?:${FRIDGE}|coolers?|${FREEZER})|(?:nevera|refrigerador) (?:de |para )?(?:medicinas?|medicamentos?|vacunas?|insulina))\b`,
      'g',
    ),
  },
  {
    family: 'chest-freezer',
    pattern: new RegExp(
      String.raw`(?:\b(?:chest|deep|dp|horizontal|box|coffin)[ -]?(?:type |style )?${FREEZE}|\bdeepfreez\w*|\bdeep ?frz\w*|\bfreezer[ ,(-]+(?:chest|deep)(?: type| style)?\b\)?|\bcongelador (?:de |tipo )?(?:pecho|horizontal|cofre|arcon)|\bcofre\b|\bchest fr[a-z]*)(?![a-z])`,
      'g',
    ),
  },
  {
    family: 'upright-freezer',
    pattern: new RegExp(
      String.raw`(?:\b(?:upright|up-right|up right|stand(?:ing)?[ -]?(?:up|alone)?|vertical|tall|frost[ -]?free) ?${FREEZER}|\bfreezer[ ,(-]+(?:upright|up-right|stand ?-?up|vertical)\b\)?|\bcongelador (?:vertical|parado))(?![a-z])`,
      'g',
    ),
  },
  {
    family: 'walk-in',
    pattern: new RegExp(
      String.raw`\b(?:walk(?:ing)?[ -]?ins?(?: (?:${COLD}|box(?:es)?))?|walkins?|reach[ -]?ins?(?: ${COLD})?|(?:display|deli|dairy|meat|open|glass(?:[ -]door)?) (?:cases?|coolers?|${FRIDGE}|merchandisers?)|prep[ -]?(?:table|cooler|${FRIDGE})|(?:commercial|restaurant|store|kitchen line|line) (?:${COLD})|cold ?(?:rooms?|storage)|(?:camara|cuarto) (?:fri[ao]|de frio|refrigerad[ao])|merchandisers?)\b`,
      'g',
    ),
  },
  {
    family: 'refrigerator',
    pattern: new RegExp(
      String.raw`\b(?:(?:mini|dorm|bar|beer|wine|beverage|drinks?|compact|larder|under ?-?counter|small office)[ -]?(?:size )?(?:${FRIDGE}|coolers?|chillers?)|minifridges?|minibar|all[ -](?:${FRIDGE})|${FRIDGE} only|${FRIDGE},? \(?(?:no|without|w\/o|sin) ${FREEZER}\)?)(?![a-z])`,
      'g',
    ),
  },
  // "freezer part", once the fridge has been named
  {
    family: 'no-unit',
    pattern: new RegExp(
      String.raw`\b(?:${FREEZER} (?:parts?|sections?|compartments?|sides?|drawers?|on (?:the )?(?:top|bottom))|(?:top|bottom) ${FREEZER}|${FRIDGE} (?:parts?|sections?|compartments?|sides?)|fresh food (?:side|section))(?![a-z])`,
      'g',
    ),
  },
  { family: 'plain-fridge', pattern: new RegExp(String.raw`\b${FRIDGE}(?![a-z])`, 'g') },
  { family: 'plain-freezer', pattern: new RegExp(String.raw`\b${FREEZER}(?![a-z])`, 'g') },
];

/** Short forms that mean a unit only in a column of appliances. */
export const COLUMN_ONLY: Readonly<Record<string, UnitFamily>> = {
  ref: 'plain-fridge',
  refer: 'plain-fridge',
  rf: 'plain-fridge',
  rfr: 'plain-fridge',
  rfg: 'plain-fridge',
  frg: 'plain-fridge',
  fr: 'plain-fridge',
  r: 'plain-fridge',
  fz: 'plain-freezer',
  f: 'plain-freezer',
  chest: 'chest-freezer',
  chf: 'chest-freezer',
  cf: 'chest-freezer',
  df: 'chest-freezer',
  deep: 'chest-freezer',
  upright: 'upright-freezer',
  upf: 'upright-freezer',
  uf: 'upright-freezer',
  wic: 'walk-in',
  wif: 'walk-in',
  cooler: 'walk-in',
  ff: 'fridge-freezer',
  'r/f': 'fridge-freezer',
  both: 'fridge-freezer',
};

/** Other things that stop working after an outage, and that this company's cold-unit board is not for. */
export const OTHER_APPLIANCE =
  /\b(?:(?:dish ?)?washers?|dish ?washers?|washing machines?|dryers?|ovens?|stoves?|ranges?|cook ?tops?|microwaves?|a\/?c(?: unit)?|air ?con\w*|hvac|heat ?pumps?|furnaces?|boilers?|(?:water|space) ?heaters?|heating|sump pumps?|disposals?|tvs?|televisions?|internet|garage doors?|lavadoras?|secadoras?|estufas?|horno|calentador)\b/;

/** Words misspelt so that no pattern holds them: compared with these. */
export const FUZZY: readonly { word: string; family: UnitFamily; limit: number; first: string }[] =
  [
    { word: 'refrigerator', family: 'plain-fridge', limit: 3, first: 'r' },
    { word: 'freezer', family: 'plain-freezer', limit: 1, first: 'f' },
    { word: 'fridge', family: 'plain-fridge', limit: 1, first: 'f' },
    { word: 'freezer', family: 'plain-freezer', limit: 1, first: 'r' },
  ];
export const NOT_FUZZY =
  /^(?:fringe|freeze|freezes|freezed|frieze|refrigerated|refrigerate|refrigeration|refrigerant|refrigerar)$/;
