import type { Skill } from '@shared/domain/skills';

export const SKILL_WORDS: Readonly<
  Record<Skill, { readonly name: string; readonly meaning: string }>
> = {
  electrical: {
    name: 'Electrical',
    meaning: 'Control boards, compressors and wiring; a class of the company’s own.',
  },
  'sealed-system': {
    name: 'Sealed system',
    meaning:
      'Opens the refrigerant circuit. Only with the technician certification of 40 CFR 82.161 ' +
      '(EPA, section 608 of the Clean Air Act): see the card before you tick this.',
  },
  commercial: {
    name: 'Commercial',
    meaning: 'Walk-ins and store equipment; a class of the company’s own.',
  },
};
