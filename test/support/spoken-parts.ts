import type { Chance } from '../../server/region/county/chance';

/** Unit, as people put it. */
export function unitWords(chance: Chance): string {
  const n = 1 + chance.below(30);
  const letter = chance.pick([...'abcdefgh']);
  return chance.pick([
    `apt ${n}`,
    `apt. ${n}${letter}`,
    `#${n}`,
    `# ${n}${letter}`,
    `unit ${letter}`,
    `unit ${n}`,
    `apartment ${n}`,
    `apt #${n}`,
    `lot ${n}`,
    `apt ${letter}`,
    `trailer ${n}`,
    `2nd floor`,
    `upstairs`,
    `basement`,
    `rear`,
    `ste ${100 + n}`,
  ]);
}

const ORDINALS = [
  '',
  'first',
  'second',
  'third',
  'fourth',
  'fifth',
  'sixth',
  'seventh',
  'eighth',
  'ninth',
  'tenth',
  'eleventh',
  'twelfth',
  'thirteenth',
  'fourteenth',
  'fifteenth',
  'sixteenth',
  'seventeenth',
  'eighteenth',
  'nineteenth',
];
const TENS = ['', '', 'twenty', 'thirty', 'forty', 'fifty', 'sixty', 'seventy', 'eighty', 'ninety'];

/** 'twenty-first' or 'twenty first'; up to ninety-ninth. */
export function ordinalWords(figure: number, chance: Chance): string {
  if (figure < 20) return ORDINALS[figure]!;
  const ten = TENS[Math.floor(figure / 10)]!;
  return figure % 10 === 0
    ? `${ten.slice(0, -1)}ieth`
    : ten + chance.pick([' ', '-']) + ORDINALS[figure % 10]!;
}

/** A town's name as people shorten it. */
export function shortTown(town: string, chance: Chance): string {
  const words = town.split(' ');
  const options = [
    `${words[0]!.slice(0, 4 + chance.below(2))}${chance.pick(['', '.'])}`,
    town[0]! + town.slice(1).replace(/[aeiou]/g, ''),
  ];
  if (words.length > 1)
    options.push(
      words[0]!,
      words.map((word) => word[0]).join(''),
      words.map((word) => word[0]).join('.') + '.',
    );
  return chance.pick(options);
}
