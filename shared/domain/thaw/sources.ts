import type { CompartmentKind } from '../cold-unit';

/** Where a limit or a measurement comes from, for the screen. */
export interface ThawSource {
  readonly what: string;
  readonly source: string;
}

const PUBLISHED_FOOD: ThawSource = {
  what: 'Refrigerator 4 h shut; 2 h above 40 F; freezer 48 h full, 24 h half full; refreeze with ice crystals or at 40 F',
  source:
    'USDA Food Safety and Inspection Service, power-outage advisories 2012 to 2024; FoodSafety.gov, Food Safety During Power Outage, charts (2023 copy)',
};

const DRY_ICE: ThawSource = {
  what: '50 lb of dry ice keep a full 18 cu ft freezer cold for two days',
  source: 'USDA FSIS and FDA, power-outage advice',
};

const REFRIGERATOR_WARMING: ThawSource = {
  what: 'A shut refrigerator took up to 6 h to 41 F, about 10 h with ice: what is likely',
  source: 'Scarcelli and Nelson, FIU Hospitality Review 31(2), article 5, 2013 (abstract)',
};

const FREEZER_WARMING: ThawSource = {
  what: 'A logged upright freezer, empty and with food: what is likely and what is possible',
  source:
    'woodgears.ca/heating/freezer.html, a hobby engineer’s test with its data (one freezer; counted as half full, our estimate)',
};

const SHORTENING: ThawSource = {
  what: 'Open doors, hot rooms and a freezer above 0 F shorten the time',
  source:
    'Ohio State University Extension HYG-5357; how much is our estimate, from Newton’s law of cooling',
};

const MEDICINE: readonly ThawSource[] = [
  {
    what: 'Insulin 28 days at 59 to 86 F',
    source:
      'FDA, Information Regarding Insulin Storage and Switching Between Products in an Emergency',
  },
  { what: 'Without power for a day or more: replace', source: 'HHS/CDC, Refrigerated Drugs' },
  {
    what: 'Cool for 2 to 3 h in a shut refrigerator',
    source: 'Santa Clara County public health, power-outage advice',
  },
  {
    what: 'Milk and formula follow the refrigerator or the freezer',
    source: 'CDC milk storage and formula pages; FoodSafety.gov chart',
  },
];

const KITCHEN: readonly ThawSource[] = [
  {
    what: '41 F; 4 h from the last reading at or under it',
    source: 'FDA Food Code 3-501.16(A)(2) and 3-501.19(B)',
  },
  {
    what: 'Above 50 F never sold; 46 to 50 F not once 4 h have passed',
    source: 'San Francisco Department of Public Health, Food Safety During Power Outages',
  },
  {
    what: 'From 2 h some health authorities ask to be told; local rules differ',
    source: 'South Health District, Georgia, 2018; Washington State DOH; Los Angeles County',
  },
];

/** The sources of the clocks of a kind of compartment. */
export const THAW_SOURCES: Readonly<Record<CompartmentKind, readonly ThawSource[]>> = {
  'fresh-food': [PUBLISHED_FOOD, REFRIGERATOR_WARMING, SHORTENING],
  freezer: [PUBLISHED_FOOD, DRY_ICE, FREEZER_WARMING, SHORTENING],
  medicine: MEDICINE,
  'commercial-stock': KITCHEN,
};

/** The sources of several kinds, each once. */
export const sourcesOf = (kinds: Iterable<CompartmentKind>): readonly ThawSource[] => [
  ...new Set([...kinds].flatMap((kind) => THAW_SOURCES[kind])),
];
