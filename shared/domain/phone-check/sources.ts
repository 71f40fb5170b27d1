/**
 * Where the words of the phone check come from. Each is shown beside what it supports, so that a
 * dispatcher can say who says so, and so that a habit of the trade never looks like a rule.
 */
export const SOURCES = {
  practice: 'Common practice, no source',
  ourRule: 'Our own rule',
  fsis: 'USDA FSIS, food safety in power outages',
  fsisHotline: 'USDA Meat and Poultry Hotline',
  cdc: 'CDC, food and power outages',
  cdcDrugs: 'HHS/CDC, Refrigerated Drugs',
  fdaInsulin: 'FDA, Insulin Storage and Switching Between Products in an Emergency',
  foodCode: 'FDA Food Code 3-501.16(A)(2)',
  iowaLog: 'Iowa Department of Inspections, power-outage guidance',
  foodChart: 'FoodSafety.gov, food to save and throw out after a power outage',
  georgia: 'South Health District (Georgia), power outages for food establishments (2018)',
  ohio: 'Ohio State University Extension HYG-5357',
  esfi: 'ESFI, downed power lines',
  cpsc: 'CPSC, generator safety (2020-2022)',
  nema: 'NEMA, Evaluating Water-Damaged Electrical Equipment (2016)',
  openNeutral: "An electrical contractor's note on open neutrals",
  startDelay: 'A repair reference: start delay of 5 to 10 minutes, unplug for 5 or more',
  breaker: 'Two repair references: unplug, fully off, then on, once',
  gfci: 'A repair reference: press reset on the GFCI outlet first',
  starter: 'A repair reference: repeated click every 2 to 5 minutes, hum, no run',
  inverter: "A maker's service note: the inverter tries again, power-off resets the count",
  deEnergise: '29 CFR 1910.333(b)(2)',
  epa608: '40 CFR 82.161 (EPA section 608)',
} as const;
export type SourceId = keyof typeof SOURCES;

/** A sentence with its source beside it. */
export interface Sourced {
  readonly words: string;
  readonly source: string;
}

export const sourced = (words: string, source: SourceId): Sourced => ({
  words,
  source: SOURCES[source],
});
