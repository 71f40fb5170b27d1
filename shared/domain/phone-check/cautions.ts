import { SOURCES } from './sources';

/** What the product says in place, wherever somebody is about to act on it. */
export const CAUTION_IDS = [
  'unplug-first',
  'stored-charge',
  'no-live-measurement',
  'no-panels',
  'dry-hands',
  'wet-stays-off',
  'reset-once',
  'no-extension-cord',
  'keep-shut',
  'generator-outside',
  'throw-it-out',
  'never-taste',
  'medicine',
  'refrigerant',
  'licensed-work',
  'emergency',
] as const;
export type CautionId = (typeof CAUTION_IDS)[number];

export interface Caution {
  readonly words: string;
  readonly source: string;
  /** Who acts on it: the customer at the unit, or the technician inside it. */
  readonly to: 'customer' | 'technician' | 'both';
}

export const CAUTIONS: Readonly<Record<CautionId, Caution>> = {
  'unplug-first': {
    words: 'Unplug the unit before touching anything inside or behind it.',
    source: SOURCES.deEnergise,
    to: 'both',
  },
  'stored-charge': {
    words:
      'Capacitors hold a charge after the plug is out. Wait five minutes, then measure before touching.',
    source: 'NFPA 70E (from memory) and common practice',
    to: 'technician',
  },
  'no-live-measurement': {
    words: 'Customers never measure anything electrical, and nobody asks them to.',
    source: SOURCES.ourRule,
    to: 'both',
  },
  'no-panels': {
    words: 'Take off no cover or panel, neither on the unit nor at the breaker box.',
    source: SOURCES.ourRule,
    to: 'customer',
  },
  'dry-hands': {
    words: 'Dry hands, dry floor, shoes on. Hold the plug, not the cord.',
    source: SOURCES.practice,
    to: 'customer',
  },
  'wet-stays-off': {
    words:
      'Anything that water has touched stays off until a qualified person has checked it. Do not touch it.',
    source: SOURCES.nema,
    to: 'both',
  },
  'reset-once': {
    words: 'Reset a breaker or GFCI once. If it trips again, leave it off.',
    source: SOURCES.breaker,
    to: 'customer',
  },
  'no-extension-cord': {
    words: 'No extension cord and no power strip: use the unit’s own cord.',
    source: SOURCES.practice,
    to: 'customer',
  },
  'keep-shut': {
    words: 'Keep the door shut. Do not open it to check or to look for a thermometer.',
    source: SOURCES.fsis,
    to: 'customer',
  },
  'generator-outside': {
    words:
      'A generator runs only outdoors, 20 feet or more from the house, exhaust pointing away. Never in a garage, porch or carport.',
    source: SOURCES.cpsc,
    to: 'both',
  },
  'throw-it-out': {
    words: 'When in doubt, throw it out.',
    source: SOURCES.fsis,
    to: 'customer',
  },
  'never-taste': {
    words: 'Never taste or smell food to find out whether it is still good.',
    source: SOURCES.fsis,
    to: 'customer',
  },
  medicine: {
    words:
      'Medicine: ask a pharmacist what to replace. If a life depends on it, keep using it until the new supply is there.',
    source: SOURCES.cdcDrugs,
    to: 'customer',
  },
  refrigerant: {
    words: 'Work on the sealed system is for people certified for it.',
    source: SOURCES.epa608,
    to: 'technician',
  },
  'licensed-work': {
    words: 'Local codes and licensed practice come first: house wiring is for an electrician.',
    source: SOURCES.ourRule,
    to: 'both',
  },
  emergency: {
    words: 'In danger, leave and call 911.',
    source: SOURCES.ourRule,
    to: 'both',
  },
};
