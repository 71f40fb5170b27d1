import type { TechnicianDto } from '@shared/contract/routes';
import { PARTS, type Part, SKILLS, type Skill } from '@shared/domain/skills';
import { sameShifts, type Shift } from './shift-entry';

/** What the form says of a technician, once it is without fault. */
export interface TechnicianTold {
  readonly name: string;
  readonly phone: string;
  readonly skills: readonly Skill[];
  readonly van: Readonly<Partial<Record<Part, number>>>;
  readonly start: readonly [number, number];
  readonly shifts: readonly Shift[];
  readonly active: boolean;
}

export type TechnicianField = keyof TechnicianTold;
export const TECHNICIAN_FIELDS: readonly TechnicianField[] = [
  'name',
  'phone',
  'skills',
  'van',
  'start',
  'shifts',
  'active',
];

const SAME: { readonly [F in TechnicianField]: (a: TechnicianTold, b: TechnicianTold) => boolean } =
  {
    name: (a, b) => a.name === b.name,
    phone: (a, b) => a.phone === b.phone,
    skills: (a, b) =>
      SKILLS.every((skill) => a.skills.includes(skill) === b.skills.includes(skill)),
    van: (a, b) => PARTS.every((part) => (a.van[part] ?? 0) === (b.van[part] ?? 0)),
    start: (a, b) => a.start[0] === b.start[0] && a.start[1] === b.start[1],
    shifts: (a, b) => sameShifts(a.shifts, b.shifts),
    active: (a, b) => a.active === b.active,
  };

/** The fields in which two differ. */
export const differing = (a: TechnicianTold, b: TechnicianTold): TechnicianField[] =>
  TECHNICIAN_FIELDS.filter((field) => !SAME[field](a, b));

export const toldOf = (dto: TechnicianDto): TechnicianTold => dto;

/** How many parts of all kinds are on the van. */
export const partsOnVan = ({ van }: Pick<TechnicianTold, 'van'>): number =>
  Object.values(van).reduce((sum, count) => sum + (count ?? 0), 0);
