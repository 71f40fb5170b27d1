/**
 * What a visit may ask of a technician. `sealed-system` needs the certification of
 * 40 CFR 82.161 (EPA section 608); the others are the company's own classes.
 */
export const SKILLS = ['electrical', 'sealed-system', 'commercial'] as const;
export type Skill = (typeof SKILLS)[number];

/** Parts that a van may carry, by the name that the trade gives them. */
export const PARTS = [
  'start-relay',
  'overload',
  'run-capacitor',
  'control-board',
  'inverter-board',
  'evaporator-fan',
  'condenser-fan',
  'thermostat',
  'defrost-heater',
  'door-gasket',
  'power-cord',
] as const;
export type Part = (typeof PARTS)[number];

/** How each part is said within a sentence. */
export const PART_WORDS: Readonly<Record<Part, string>> = {
  'start-relay': 'start relay',
  overload: 'overload protector',
  'run-capacitor': 'run capacitor',
  'control-board': 'control board',
  'inverter-board': 'inverter board',
  'evaporator-fan': 'evaporator fan',
  'condenser-fan': 'condenser fan',
  thermostat: 'thermostat',
  'defrost-heater': 'defrost heater',
  'door-gasket': 'door gasket',
  'power-cord': 'power cord',
};
