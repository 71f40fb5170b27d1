import type { Role } from '@shared/contract/common';
import type { Part, Skill } from '@shared/domain/skills';

/** The demo's staff. Every name, number and address is invented. */
export interface DemoPerson {
  readonly role: Role;
  readonly name: string;
  readonly email: string;
}

export const DESK: readonly DemoPerson[] = [
  { role: 'dispatcher', name: 'Mara Quill', email: 'mara@example.com' },
  { role: 'dispatcher', name: 'Jonas Fenwick', email: 'jonas@example.com' },
  { role: 'manager', name: 'Ines Calloway', email: 'ines@example.com' },
  { role: 'owner', name: 'Ruth Oakhaven', email: 'ruth@example.com' },
];

export interface DemoTechnician extends DemoPerson {
  readonly skills: readonly Skill[];
  readonly van: Partial<Record<Part, number>>;
}

const WELL_STOCKED: Partial<Record<Part, number>> = {
  'start-relay': 6,
  overload: 6,
  'run-capacitor': 4,
  'control-board': 2,
  'condenser-fan': 2,
  'evaporator-fan': 2,
  thermostat: 2,
  'power-cord': 3,
  'door-gasket': 1,
};
const LIGHT: Partial<Record<Part, number>> = {
  'start-relay': 3,
  overload: 3,
  'run-capacitor': 2,
  'power-cord': 1,
};

export const TECHNICIANS: readonly DemoTechnician[] = (
  [
    ['Theo Larkspur', ['electrical', 'sealed-system'], WELL_STOCKED],
    ['Odette Marrow', ['electrical', 'commercial'], WELL_STOCKED],
    ['Sam Pellworth', ['electrical'], LIGHT],
    ['Imani Thistle', ['electrical', 'sealed-system', 'commercial'], WELL_STOCKED],
    ['Lucas Brackwater', ['electrical'], WELL_STOCKED],
    ['Hana Saltmarsh', ['electrical', 'sealed-system'], LIGHT],
    ['Piet Underhill', ['electrical'], WELL_STOCKED],
    ['Noor Windlass', ['electrical', 'commercial'], WELL_STOCKED],
  ] as const
).map(([name, skills, van]) => ({
  role: 'technician',
  name,
  email: `${(name.split(' ')[0] ?? '').toLowerCase()}@example.com`,
  skills,
  van,
}));

export const GIVEN_NAMES =
  'Ada Ansel Bea Bram Cleo Cyrus Dara Dov Elke Emil Faye Finn Greta Gus Hazel Hugo Ilse Ivo Jada Jude Kaia Knox Lena Lior Maeve Milo Nell Nico Opal Otis Petra Quinn Rhea Rune Sage Silas Tess Tobin Una Vera Wade Willa Yara Zeke'.split(
    ' ',
  );
export const FAMILY_NAMES =
  'Ashdown Barrowby Causeway Dunmere Elmswell Fallowfield Gorseland Hartsease Inglewick Jessamine Kettlewell Lowmoor Marchbank Nettlefold Osierbed Pennyroyal Quayside Rushmere Sedgewick Tarnbrook Umberleigh Vantreight Wickstead Yellowham'.split(
    ' ',
  );
