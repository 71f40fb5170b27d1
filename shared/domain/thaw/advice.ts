/** Which card of advice belongs to a compartment. */
export const ADVICE_KEYS = [
  'fresh-food',
  'freezer',
  'insulin',
  'insulin-hot',
  'insulin-frozen',
  'label',
  'read-label',
  'medicine-quarantine',
  'milk-or-formula',
  'frozen-milk',
  'commercial-stock',
] as const;
export type AdviceKey = (typeof ADVICE_KEYS)[number];

export interface Advice {
  readonly words: string;
  readonly source: string;
}

/**
 * What to say to the person in front of the unit. It never says that food is safe to eat, never
 * invites tasting or smelling, and never tells anyone to throw medicine away.
 */
export const ADVICE: Readonly<Record<AdviceKey, Advice>> = {
  'fresh-food': {
    words:
      'Keep the door shut. Move what matters to a cooler with ice before the published limit has ' +
      'passed; after it, plan to discard the items on the list. When in doubt, throw it out. Never ' +
      'taste food to test it.',
    source: 'USDA FSIS power-outage advisories; FoodSafety.gov chart',
  },
  freezer: {
    words:
      'Do not open it to check; tell us how full it is. Ice crystals, or 40 F or below on a ' +
      'thermometer, mean that it may be refrozen. Dry ice holds it longer: gloves, fresh air, and ' +
      'tell the technician.',
    source: 'USDA FSIS and FDA power-outage advice; Ohio State University Extension HYG-5357',
  },
  insulin: {
    words:
      'Insulin may stay out of the refrigerator at 59 to 86 F for up to 28 days. Keep it out of ' +
      'the sun and away from direct ice. Ask a pharmacist if you are unsure.',
    source: 'FDA, Information Regarding Insulin Storage in an Emergency',
  },
  'insulin-hot': {
    words:
      'Move the insulin to the coolest room or a cooler with packs, not touching ice. Above 86 F ' +
      'it loses effect: replace it as soon as you can, keep using it if a life depends on it, and ' +
      'ask a pharmacist.',
    source: 'FDA, Information Regarding Insulin Storage in an Emergency',
  },
  'insulin-frozen': {
    words: 'Insulin that froze is not used. Replace it and ask a pharmacist today.',
    source: 'FDA, Information Regarding Insulin Storage in an Emergency',
  },
  label: {
    words:
      'Follow the label. Keep the medicine cool, without direct ice. Past the limit: replace it, ' +
      'ask the pharmacist, keep using it if a life depends on it.',
    source: 'HHS/CDC, Refrigerated Drugs',
  },
  'read-label': {
    words:
      'Please read the label to us: how long, and up to which temperature, may it stay out? Move it ' +
      'to a cooler with packs, without direct ice, and ask a pharmacist.',
    source: 'HHS/CDC, Refrigerated Drugs; Santa Clara County public health',
  },
  'medicine-quarantine': {
    words:
      'Set it apart, keep it cold and do not use it until the pharmacist or the maker has said ' +
      'so. Do not discard it.',
    source: 'Our rule: no hour is published for vaccines and injectable biologics',
  },
  'milk-or-formula': {
    words:
      'Move expressed milk or formula to a cooler with packs now. Opened formula that was above ' +
      '40 F for 2 hours is replaced.',
    source: 'CDC milk storage and formula pages; FoodSafety.gov chart',
  },
  'frozen-milk': {
    words:
      'Keep the freezer shut. Milk with ice crystals may be refrozen; thawed and still cold, keep ' +
      'it refrigerated and use it the next day.',
    source: 'CDC and USDA as quoted by lactation guidance',
  },
  'commercial-stock': {
    words:
      'Log a food temperature every 2 hours and keep the doors shut. Each reading at or under 41 F ' +
      'counts. From 2 hours on, tell your health authority; local rules differ.',
    source: 'FDA Food Code 3-501.16 and 3-501.19; Iowa Department of Inspections',
  },
};
