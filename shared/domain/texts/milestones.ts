/** What a customer is texted about. Each is sent at most once per call and count. */
export const MILESTONE_KINDS = [
  'call-received',
  'settled-by-phone',
  'on-the-way',
  'eta-moved',
  'stop-confirmed',
  'start-confirmed',
  'help',
] as const;
export type MilestoneKind = (typeof MILESTONE_KINDS)[number];

export const TEXT_LANGUAGES = ['en', 'es'] as const;
export type TextLanguage = (typeof TEXT_LANGUAGES)[number];

/** What the templates may say. Every field is free text from somewhere, so each is cleaned. */
export interface MilestoneFacts {
  readonly company: string;
  /** The company's phone as people write it, for questions. */
  readonly companyPhone: string;
  /** The arrival window as already formatted in the region's zone, such as "2:30-3:00 pm". */
  readonly eta?: string;
  /** The technician's given name. */
  readonly technician?: string;
}

/** A text never gets longer than this: four joined GSM-7 segments, far under the provider's 1,600. */
export const MAX_BODY_CHARACTERS = 600;
const MAX_NAME_CHARACTERS = 40;

type Template = (facts: Readonly<Record<keyof MilestoneFacts, string>>) => string;

/**
 * The fixed Spanish words are chosen so that GSM-7 can carry them (é, ñ, ¿ and ¡ it has; á, í, ó
 * and ú it has not): one such letter would more than double the price of every text.
 */
const TEMPLATES: Readonly<Record<MilestoneKind, Readonly<Record<TextLanguage, Template>>>> = {
  'call-received': {
    en: (f) =>
      `${f.company}: we have your call about your cold unit. Keep its door shut. We text you when a technician is on the way. Questions: ${f.companyPhone}. Reply STOP to end texts, HELP for help.`,
    es: (f) =>
      `${f.company}: recibimos su llamada sobre su equipo. Mantenga la puerta cerrada. Le avisamos cuando vaya su técnico. Preguntas: ${f.companyPhone}. Responda STOP para no recibir textos, AYUDA para ayuda.`,
  },
  // In fixed words: what the dispatcher wrote down is for the company, and in one language.
  'settled-by-phone': {
    en: (f) =>
      `${f.company}: your call is settled for now. Keep the door shut while it cools down. Food: when in doubt, throw it out. If it stops again, call ${f.companyPhone}. Reply STOP to end texts.`,
    es: (f) =>
      `${f.company}: su llamada queda resuelta por ahora. Mantenga la puerta cerrada hasta que vuelva a estar fresco. Si duda de un alimento, no lo coma. Si vuelve a parar, llame al ${f.companyPhone}. Responda STOP para no recibir textos.`,
  },
  'on-the-way': {
    en: (f) =>
      `${f.company}: ${f.technician} is on the way to you and should arrive ${f.eta}. Keep the door of the unit shut. Questions: ${f.companyPhone}. Reply STOP to end texts.`,
    es: (f) =>
      `${f.company}: ${f.technician} viene en camino y debe llegar ${f.eta}. Mantenga cerrada la puerta del equipo. Preguntas: ${f.companyPhone}. Responda STOP para no recibir textos.`,
  },
  'eta-moved': {
    en: (f) =>
      `${f.company}: the arrival time has changed. ${f.technician} should now arrive ${f.eta}. Questions: ${f.companyPhone}. Reply STOP to end texts.`,
    es: (f) =>
      `${f.company}: la hora de llegada cambia. ${f.technician} debe llegar ahora ${f.eta}. Preguntas: ${f.companyPhone}. Responda STOP para no recibir textos.`,
  },
  // 47 CFR 64.1200(a)(12): one confirmation, and nothing in it that sells.
  'stop-confirmed': {
    en: (f) =>
      `${f.company}: you will get no more texts from us. We still handle your call; our phone is ${f.companyPhone}. Reply START to get texts again.`,
    es: (f) =>
      `${f.company}: ya no le enviamos textos. Seguimos con su llamada; nuestro teléfono es ${f.companyPhone}. Responda START para recibir textos otra vez.`,
  },
  'start-confirmed': {
    en: (f) =>
      `${f.company}: you get texts about your call again. Questions: ${f.companyPhone}. Reply STOP to end texts, HELP for help.`,
    es: (f) =>
      `${f.company}: desde ahora recibe otra vez textos sobre su llamada. Preguntas: ${f.companyPhone}. Responda STOP para no recibir textos, AYUDA para ayuda.`,
  },
  help: {
    en: (f) =>
      `${f.company}: texts about your repair call, a few per call. Questions: ${f.companyPhone}. In danger call 911. Message and data rates may apply. Reply STOP to end texts.`,
    es: (f) =>
      `${f.company}: textos sobre su llamada de servicio, pocos por llamada. Preguntas: ${f.companyPhone}. En peligro llame al 911. Pueden aplicarse tarifas. Responda STOP para no recibir textos.`,
  },
};

const UNNAMED: Readonly<Record<TextLanguage, { technician: string; eta: string }>> = {
  en: { technician: 'Your technician', eta: 'soon' },
  es: { technician: 'Su técnico', eta: 'pronto' },
};

/** The text for a milestone, cleaned and cut to {@link MAX_BODY_CHARACTERS}. */
export function milestoneText(
  kind: MilestoneKind,
  language: TextLanguage,
  facts: MilestoneFacts,
): string {
  const name = (text: string): string => oneLine(text, MAX_NAME_CHARACTERS);
  const body = TEMPLATES[kind][language]({
    company: name(facts.company),
    companyPhone: name(facts.companyPhone),
    eta: name(facts.eta ?? '') || UNNAMED[language].eta,
    technician: name(facts.technician ?? '') || UNNAMED[language].technician,
  });
  return oneLine(body, MAX_BODY_CHARACTERS);
}

/**
 * The key under which a text exists once: the same milestone of the same call is never sent twice,
 * however often the command that reaches it is repeated.
 *
 * @param n which time the milestone was reached, from 1; only ETA changes and answers reach 2
 */
export const milestoneKey = (callId: string, kind: MilestoneKind, n: number): string =>
  `${callId}:${kind}:${n}`;

/**
 * One line without control or direction-changing characters, at most `maxCharacters` long and never
 * cut inside a character.
 */
export function oneLine(text: string, maxCharacters: number): string {
  const clean = text
    .normalize('NFC')
    // Lone surrogates are category Cs; bidirectional marks and zero-width characters are Cf.
    .replace(/[\p{Cc}\p{Cf}\p{Cs}\p{Zl}\p{Zp}]+/gu, ' ')
    .replace(/\s+/gu, ' ')
    .trim();
  const characters = [...clean];
  return characters.length <= maxCharacters
    ? clean
    : `${characters
        .slice(0, maxCharacters - 3)
        .join('')
        .trimEnd()}...`;
}
