/**
 * What a text from a customer asks for.
 *
 * Source: 47 CFR 64.1200(a)(10) as amended by 89 FR 15756 (5 March 2024): stop, quit, end, revoke,
 * opt out, cancel and unsubscribe are conclusive, and so is any other reasonable wording. STOPALL,
 * REMOVE, START, UNSTOP, YES, HELP and INFO are the carriers' words (a messaging help page).
 * The Spanish words and the phrases are our reading of "reasonable wording": no source.
 */

export type InboundKind = 'stop' | 'start' | 'help' | 'other';

export interface Inbound {
  readonly kind: InboundKind;
  /** Whether it was one of the listed words alone; `wording` is read from a longer sentence. */
  readonly by: 'keyword' | 'wording' | null;
  /**
   * Whether the same word may also mean the visit ("Cancel"). The opt-out holds all the same; a
   * person should ask about the visit by phone.
   */
  readonly mayMeanVisit: boolean;
  /** The language that the word belongs to, so that the answer can be in it. */
  readonly language: 'en' | 'es' | null;
}

const STOP_EN = ['STOP', 'STOPALL', 'QUIT', 'END', 'REVOKE', 'OPTOUT', 'CANCEL', 'UNSUBSCRIBE'];
const STOP_EN_CARRIER = ['REMOVE', 'NOMORE'];
const STOP_ES = ['ALTO', 'PARE', 'PARAR', 'PAREN', 'DETENER', 'CANCELAR', 'BAJA', 'NOMAS'];
const START_EN = ['START', 'UNSTOP'];
const START_ES = ['EMPEZAR', 'INICIAR', 'COMENZAR'];
/** Opt in again only for somebody who had opted out; to anyone else they are an answer. */
const YES_EN = ['YES'];
const YES_ES = ['SI'];
const HELP_EN = ['HELP', 'INFO'];
const HELP_ES = ['AYUDA'];

const POLITE = new Set([
  'PLEASE',
  'PLS',
  'THANKS',
  'THANK',
  'YOU',
  'NOW',
  'POR',
  'FAVOR',
  'GRACIAS',
  'YA',
]);

/** The object of the refusal stands right behind it, so "stop by and text me" is no opt-out. */
const STOP_WORDING: readonly (readonly [RegExp, 'en' | 'es'])[] = [
  [
    /(?<!\b(?:DO NOT|DONT|DON T|NEVER|NOT) )\b(?:STOP|QUIT|CEASE) (?:SENDING |WITH )?(?:ME )?(?:(?:THE|THESE|THOSE|YOUR|ALL|ANY|MORE) )*(?:TEXT|TEXTS|TEXTING|MESSAGE|MESSAGES|MESSAGING|SMS|CONTACTING)\b/,
    'en',
  ],
  [
    /\b(?:DO NOT|DONT|DON T|NEVER) (?:EVER )?(?:TEXT|MESSAGE|CONTACT|SMS) (?:ME|US|THIS NUMBER)\b(?! (?:BEFORE|AFTER|UNTIL|TILL|IF|WHEN|UNLESS|BY|AT (?!THIS)))/,
    'en',
  ],
  [
    /\b(?:DO NOT|DONT|DON T) SEND (?:ME |US )?(?:ANY |ANYMORE |MORE )*(?:TEXT|TEXTS|MESSAGE|MESSAGES|SMS)\b/,
    'en',
  ],
  [/\bNO MORE (?:TEXT|TEXTS|TEXTING|MESSAGE|MESSAGES|SMS)\b/, 'en'],
  [/\b(?:TAKE|REMOVE|DELETE) (?:ME|US|MY NUMBER|THIS NUMBER) (?:OFF|FROM)\b/, 'en'],
  [/\b(?:OPT|OPTING) (?:ME )?OUT\b/, 'en'],
  [/\bUNSUBSCRIBE (?:ME|US|THIS NUMBER)\b/, 'en'],
  [/\bNO (?:ME )?(?:ENVIE|ENVIEN|MANDE|MANDEN|ESCRIBA|ESCRIBAN) MAS\b/, 'es'],
  [/\bNO MAS (?:TEXTOS|MENSAJES|SMS)\b/, 'es'],
  [/\bDEJEN? DE (?:ENVIAR|ENVIARME|MANDAR|MANDARME|ESCRIBIR|ESCRIBIRME)\b/, 'es'],
];

/**
 * @param body the text as it came
 * @param hasOptedOut whether this phone had opted out before; only then is "yes" an opt-in
 */
export function classifyInbound(body: string, hasOptedOut = false): Inbound {
  const words = wordsOf(body);
  const bare = words.filter((word) => !POLITE.has(word));
  // "opt out", "OPT-OUT", "optout" and "S T O P" are one word here.
  const joined = bare.join('');
  const said = new Set(bare).size === 1 ? (bare[0] ?? '') : joined;

  const listed = (
    kind: InboundKind,
    en: readonly string[],
    es: readonly string[],
  ): Inbound | null => {
    if (!en.includes(said) && !es.includes(said)) return null;
    const mayMeanVisit = said === 'CANCEL' || said === 'CANCELAR';
    return { kind, by: 'keyword', mayMeanVisit, language: en.includes(said) ? 'en' : 'es' };
  };

  return (
    listed('stop', [...STOP_EN, ...STOP_EN_CARRIER], STOP_ES) ??
    listed('start', START_EN, START_ES) ??
    (hasOptedOut ? listed('start', YES_EN, YES_ES) : null) ??
    listed('help', HELP_EN, HELP_ES) ??
    worded(words.join(' ')) ?? { kind: 'other', by: null, mayMeanVisit: false, language: null }
  );
}

function worded(sentence: string): Inbound | null {
  const hit = STOP_WORDING.find(([pattern]) => pattern.test(sentence));
  return hit ? { kind: 'stop', by: 'wording', mayMeanVisit: false, language: hit[1] } : null;
}

/** Upper-case words without accents, punctuation or emoji. */
function wordsOf(body: string): readonly string[] {
  return body
    .normalize('NFKD')
    .replace(/\p{M}/gu, '')
    .toUpperCase()
    .replace(/['’]/g, '')
    .split(/[^\p{L}\p{N}]+/u)
    .filter((word) => word !== '');
}
