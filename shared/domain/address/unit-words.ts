/**
 * Words that begin a unit, and how the unit is written. Source: USPS Publication 28, section 213.1;
 * further spellings from memory and common practice.
 */
export const UNIT_WORDS: ReadonlyMap<string, string> = new Map([
  ['apt', 'Apt'],
  ['apartment', 'Apt'],
  ['appt', 'Apt'],
  ['unit', 'Unit'],
  ['aptmt', 'Apt'],
  ['flat', 'Apt'],
  ['ste', 'Ste'],
  ['suite', 'Ste'],
  ['lot', 'Lot'],
  ['rm', 'Rm'],
  ['room', 'Rm'],
  ['trlr', 'Trlr'],
  ['trailer', 'Trlr'],
  ['bldg', 'Bldg'],
  ['building', 'Bldg'],
  ['fl', 'Fl'],
  ['floor', 'Fl'],
  ['ph', 'Ph'],
  ['penthouse', 'Ph'],
  ['spc', 'Spc'],
  ['space', 'Spc'],
  ['slip', 'Slip'],
]);

/** Units that need no number. Source: USPS Publication 28, section 213.2. */
export const BARE_UNITS: ReadonlyMap<string, string> = new Map([
  ['bsmt', 'Bsmt'],
  ['basement', 'Bsmt'],
  ['rear', 'Rear'],
  ['upstairs', 'Uppr'],
  ['upper', 'Uppr'],
  ['downstairs', 'Lowr'],
  ['lower', 'Lowr'],
]);
