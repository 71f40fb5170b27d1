import type { Part } from '@shared/domain/skills';

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
