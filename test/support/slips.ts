import type { Chance } from '../../server/region/county/chance';

/** Keys beside each key of an American keyboard. */
const BESIDE: Readonly<Record<string, string>> = {
  q: 'wa',
  w: 'qes',
  e: 'wrd',
  r: 'etf',
  t: 'ryg',
  y: 'tuh',
  u: 'yij',
  i: 'uok',
  o: 'ipl',
  p: 'ol',
  a: 'qsz',
  s: 'awdx',
  d: 'sefc',
  f: 'drgv',
  g: 'fthb',
  h: 'gyjn',
  j: 'hukm',
  k: 'jil',
  l: 'kop',
  z: 'asx',
  x: 'zsdc',
  c: 'xdfv',
  v: 'cfgb',
  b: 'vghn',
  n: 'bhjm',
  m: 'njk',
};

/** One slip of a finger: a key beside, a key left out, hit twice, swapped with the next, or added. */
export function slipOfFinger(word: string, chance: Chance): string {
  // The first letter is seldom hit wrong: the eye is on it.
  const from = chance.happens(0.1) ? 0 : 1;
  const at = from + chance.below(Math.max(1, word.length - from));
  const letter = word[at]!.toLowerCase();
  const beside = chance.pick([...(BESIDE[letter] ?? 'e')]);
  const kind = chance.next();
  if (kind < 0.35) return word.slice(0, at) + beside + word.slice(at + 1);
  if (kind < 0.6) return word.slice(0, at) + word.slice(at + 1);
  if (kind < 0.7) return word.slice(0, at) + letter + word.slice(at);
  if (kind < 0.9 && at + 1 < word.length)
    return word.slice(0, at) + word[at + 1]! + word[at]! + word.slice(at + 2);
  return word.slice(0, at) + beside + word.slice(at);
}

/** Spellings that sound alike in English, each way that they are mixed up. */
const HEARD: readonly (readonly [RegExp, string])[] = [
  [/ph/, 'f'],
  [/f(?!f)/, 'ph'],
  [/ck/, 'k'],
  [/c(?=[aou])/, 'k'],
  [/k(?!n)/, 'c'],
  [/c(?=[ei])/, 's'],
  [/s(?=[ei])/, 'c'],
  [/s$/, 'z'],
  [/z/, 's'],
  [/ee/, 'ea'],
  [/ea/, 'ee'],
  [/ie/, 'ei'],
  [/ei/, 'ie'],
  [/er(?=$|[a-z])/, 'ar'],
  [/ar/, 'er'],
  [/or/, 'er'],
  [/ir/, 'ur'],
  [/ur/, 'er'],
  [/on$/, 'en'],
  [/en$/, 'in'],
  [/an$/, 'en'],
  [/el$/, 'le'],
  [/le$/, 'el'],
  [/et$/, 'it'],
  [/it$/, 'et'],
  [/ai/, 'ay'],
  [/ay/, 'ai'],
  [/ow/, 'ou'],
  [/ou/, 'ow'],
  [/aw/, 'au'],
  [/wh/, 'w'],
  [/^kn/, 'n'],
  [/^gn/, 'n'],
  [/^wr/, 'r'],
  [/mb$/, 'm'],
  [/x/, 'cks'],
  [/qu/, 'kw'],
  [/y(?=.)/, 'i'],
  [/y$/, 'ey'],
  [/i(?=[a-z]{2})/, 'y'],
  [/dg/, 'j'],
  [/j/, 'g'],
  [/([bdfglmnprt])\1/, '$1'],
  [/([lmnrt])(?=[aeiou])/, '$1$1'],
  [/e$/, ''],
  [/oo/, 'u'],
  [/u(?=[a-z])/, 'o'],
  [/th/, 't'],
  [/tch/, 'ch'],
  [/ch/, 'tch'],
];

/** A word as somebody writes it who has only heard it; null when it can be spelt in one way only. */
export function byEar(word: string, chance: Chance): string | null {
  const [first = '', rest = ''] = [word[0], word.slice(1)];
  const options = HEARD.filter(([heard]) =>
    heard.test(heard.source.startsWith('^') ? word.toLowerCase() : rest),
  );
  if (options.length === 0) return null;
  const [heard, written] = chance.pick(options);
  return heard.source.startsWith('^')
    ? word.toLowerCase().replace(heard, written)
    : first + rest.replace(heard, written);
}
