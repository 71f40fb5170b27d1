import type { WhatIf } from '@shared/contract/forecast';

export interface WhatIfField {
  readonly key: keyof WhatIf;
  readonly label: string;
  readonly least: number;
  readonly most: number;
  readonly step: number;
}

export const FIELDS: readonly WhatIfField[] = [
  { key: 'technicians', label: 'Technicians, + or −', least: -30, most: 30, step: 1 },
  { key: 'overtimeHours', label: 'Hours of overtime', least: 0, most: 8, step: 0.5 },
  { key: 'secondShift', label: 'In a second shift', least: 0, most: 30, step: 1 },
  { key: 'phoneStaff', label: 'On the phones, + or −', least: -20, most: 20, step: 1 },
  { key: 'partsOnEachVan', label: 'More of each part on vans', least: 0, most: 20, step: 1 },
];

export const NOTHING_CHANGED: WhatIf = {
  technicians: 0,
  overtimeHours: 0,
  secondShift: 0,
  phoneStaff: 0,
  partsOnEachVan: 0,
};

/** The number that was typed, or what is wrong with it. An empty field is 0. */
export function readField(
  { label, least, most, step }: WhatIfField,
  typed: string,
): number | string {
  // A keyboard's minus and the typographer's.
  const value = Number(typed.trim().replace('−', '-').replace(',', '.') || '0');
  if (!Number.isFinite(value) || value < least || value > most)
    return `${label}: a number from ${least} to ${most}.`;
  if (!Number.isInteger(value / step))
    return `${label}: in steps of ${step}, such as ${Math.round(value)}.`;
  return value;
}

const some = (count: number, one: string, more: string): string =>
  `${Math.abs(count)} ${Math.abs(count) === 1 ? one : more}`;

/** `2 technicians more, 1 hour of overtime` */
export function changeWords(change: WhatIf): string {
  const { technicians, overtimeHours, secondShift, phoneStaff, partsOnEachVan } = change;
  const moreOrFewer = (count: number): string => (count > 0 ? 'more' : 'fewer');
  return [
    technicians !== 0 &&
      `${some(technicians, 'technician', 'technicians')} ${moreOrFewer(technicians)}`,
    overtimeHours !== 0 && `${some(overtimeHours, 'hour', 'hours')} of overtime`,
    secondShift !== 0 && `${some(secondShift, 'technician', 'technicians')} in a second shift`,
    phoneStaff !== 0 &&
      `${some(phoneStaff, 'person', 'people')} ${moreOrFewer(phoneStaff)} on the phones`,
    partsOnEachVan !== 0 && `${partsOnEachVan} more of each part on each van`,
  ]
    .filter((words) => words !== false)
    .join(', ');
}
