import { isDenied } from './negation';
import { plain } from './plain-text';

/** What must be asked about before anything else, because a person may be hurt. */
export const DANGERS = [
  'smoke',
  'burning-smell',
  'sparks',
  'fire',
  'water',
  'downed-line',
  'shock',
  'gas',
  'generator-indoors',
] as const;
export type Danger = (typeof DANGERS)[number];

const WORDS: readonly { danger: Danger; pattern: RegExp }[] = [
  {
    danger: 'smoke',
    pattern: /\b(?:smok(?:e|es|ing|ey|y)|smoked (?:up|when|a little)|humo|fumes)\b/g,
  },
  {
    danger: 'burning-smell',
    pattern:
      /\b(?:burn(?:ing|t|ed|s)?[ -]?(?:like )?(?:smell|odou?r|plastic|wire|wires|plug|cord|outlet|rubber|electrical)s?|smell(?:s|ed|ing)? (?:\w+ ){0,3}(?:burn(?:t|ing|ed)?|hot|electrical|smoky|scorched)|(?:electrical|hot|acrid|scorched|funny electrical) (?:smell|odou?r)|burning|burnt(?! food| out bulb)|scorch(?:ed|ing)?|melted (?:plug|cord|outlet|wire\w*)|(?:plug|outlet|cord|wall) (?:is |was |feels? |got )?(?:very |too )?(?:hot|melt\w*|charred)|huele a (?:quemado|humo)|(?:olor a )?quemado)\b/g,
  },
  {
    danger: 'sparks',
    pattern:
      /\b(?:spark(?:s|ed|ing|y)?|arc(?:ed|ing)|popping (?:at|from) (?:the )?outlet|chispas?|buzzing (?:outlet|panel|breaker))\b/g,
  },
  {
    danger: 'fire',
    pattern:
      /\b(?:on fire|fire(?! ?(?:dept|department|station|house|pit|place|side|wood|fly|hall|ln|lane|rd|road))|flames?|incendio|fuego)\b/g,
  },
  {
    danger: 'water',
    pattern:
      /\b(?:flood(?:ed|ing|s|water)?|standing water|(?:water|wet|agua) (?:\w+ ){0,2}(?:on|in|under|over|all over|across|around|en) (?:the |my |el )?(?:\w+ )?(?:floor|basement|kitchen|garage|outlet|panel|plug|piso|motor|compressor|fridge|freezer|cellar|unit)|puddles?|inches of water|(?:basement|kitchen|garage|floor|outlet|panel|plug|cord) (?:is |was |got |are )?(?:soaked|soaking|wet|under ?water)|water (?:came|got|coming|getting) in|submerged|inundad[oa]|storm surge)\b/g,
  },
  {
    danger: 'downed-line',
    pattern:
      /\b(?:down(?:ed)? (?:power ?|electric(?:al)? |utility )?(?:lines?|wires?|poles?|cables?)|(?:power ?|electric(?:al)? |utility )?(?:lines?|wires?|poles?|cables?) (?:is |are |came |fell |laying |lying |hanging )?(?:down\b(?! ?(?:the|to|for|here at))|on (?:the )?(?:ground|drive\w*|roof|house|road|lawn|yard|fence|car)|across|hanging|low|fallen)|fallen (?:power ?)?(?:lines?|wires?)|live wires?|cables? caid\w+|poste caido)\b/g,
  },
  {
    danger: 'shock',
    pattern:
      /\b(?:(?:got|get|gets|gave|gives|getting|was) (?:\w+ ){0,3}(?:shock(?:ed|s)?|zapped)|shocked|electric(?:al)? shock|zap(?:s|ped)|tingl(?:e|es|ing)|toques?)\b/g,
  },
  {
    danger: 'gas',
    pattern:
      /\b(?:smell(?:s|ed)? (?:\w+ ){0,2}(?:of |like )?gas|gas (?:smell|leak|odou?r)|carbon monoxide|co (?:alarm|detector|monitor)|(?:ammonia|chemical) (?:smell|odou?r)|olor a gas)\b/g,
  },
  {
    danger: 'generator-indoors',
    pattern:
      /\b(?:gen(?:erator|ny|nie|set)?) (?:is |running |runs )*(?:inside|indoors|in (?:the |my |their )?(?:garage|house|basement|kitchen|porch|hall\w*|carport))\b/g,
  },
];
const LIST_WORD =
  /(?:smoke|sparks?|sparking|fire|flames?|burning|burnt|smells?|odou?rs?|water|flooding|shocks?|wires?|lines?|humo|chispas?|downed lines?|burning smells?)/;
const NO_DANGER = /^(?:smoke[sd]? (?:fish|meat|salmon|ham|house)|smoking section)/;

/** Without one of these stems no word above can stand in the text; most messages have none. */
const HINT =
  /smok|humo|fume|burn|scorch|melt|hot|char|smell|odou?r|olor|huele|quem|spark|arc|popp|chisp|buzz|fire|flame|incend|fueg|flood|water|wet|agua|puddle|inches|soak|submerg|inund|surge|line|wire|pole|cable|poste|shock|zap|tingl|toque|gas|carbon|co (?:alarm|det|mon)|ammonia|chemical|gen/;

/** The dangers that a text names and does not deny. */
export function readDangers(raw: string): readonly Danger[] {
  const text = plain(raw);
  if (!HINT.test(text)) return [];
  const found = new Set<Danger>();
  for (const { danger, pattern } of WORDS) {
    if (found.has(danger)) continue;
    for (const match of text.matchAll(pattern)) {
      if (NO_DANGER.test(text.slice(match.index))) continue;
      if (
        /\bnon?-?$/.test(text.slice(0, match.index).trim()) &&
        danger === 'smoke' &&
        /ing$/.test(match[0])
      )
        continue;
      if (!isDenied(text, match.index, match.index + match[0].length, LIST_WORD)) found.add(danger);
    }
  }
  return [...found];
}
