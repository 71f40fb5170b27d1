/** What a column of a night log can hold. */
export const COLUMN_ROLES = [
  'callId',
  'receivedAt',
  'receivedDate',
  'receivedTime',
  'callerName',
  'firstName',
  'lastName',
  'business',
  'phone',
  'altPhone',
  'address',
  'streetNumber',
  'street',
  'unitNo',
  'city',
  'state',
  'postcode',
  'unitKind',
  'remarks',
  'powerOutAt',
  'powerBackAt',
  'hoursOut',
  'contents',
  'medicine',
  'danger',
  'language',
  /** Kept with the remarks under its own title. */
  'detail',
  /** Who took the call, and what else tells nothing about the household. Still kept with the row. */
  'ignore',
] as const;
export type ColumnRole = (typeof COLUMN_ROLES)[number];

/** Words for the mapping screen. */
export const ROLE_LABELS: Readonly<Record<ColumnRole, string>> = {
  callId: 'Call number',
  receivedAt: 'Received (date and time)',
  receivedDate: 'Received (date)',
  receivedTime: 'Received (time)',
  callerName: 'Name',
  firstName: 'First name',
  lastName: 'Last name',
  business: 'Business',
  phone: 'Phone',
  altPhone: 'Other phone',
  address: 'Address',
  streetNumber: 'House number',
  street: 'Street',
  unitNo: 'Apartment',
  city: 'Town',
  state: 'State',
  postcode: 'Postcode',
  unitKind: 'Appliance',
  remarks: 'Message',
  powerOutAt: 'Power went',
  powerBackAt: 'Power back',
  hoursOut: 'Hours without power',
  contents: 'Contents',
  medicine: 'Medicine',
  danger: 'Danger',
  language: 'Language',
  detail: 'Keep with the message',
  ignore: 'Not used',
};

/** Roles that more than one column may have; their cells are joined in order. */
export const SHARED_ROLES: ReadonlySet<ColumnRole> = new Set<ColumnRole>([
  'remarks',
  'detail',
  'ignore',
  'altPhone',
  'address',
  'unitKind',
  'powerOutAt',
  'powerBackAt',
  'contents',
  'medicine',
  'danger',
]);

export interface ColumnGuess {
  /** Position in the row, from 0. */
  readonly index: number;
  /** The column's title in the file; null when the file has no titles. */
  readonly header: string | null;
  readonly role: ColumnRole;
  /** 0 (a guess) to 1 (title and cells agree; or a person said so). */
  readonly confidence: number;
  /** The reason, for the person who checks it. */
  readonly why: string;
}

/** Which column holds what. Plain data: it can be shown, corrected, stored and used for the next log. */
export interface ColumnMap {
  readonly columns: readonly ColumnGuess[];
}

/** The cells of a role in column order. */
export function cellsOf(
  map: ColumnMap,
  cells: readonly string[],
  role: ColumnRole,
): readonly string[] {
  return (placesOf(map).get(role) ?? NOWHERE).map((index) => cells[index] ?? '');
}

const NOWHERE: readonly number[] = [];
const PLACES = new WeakMap<ColumnMap, ReadonlyMap<ColumnRole, readonly number[]>>();

/** Asked some twenty times for every row, so it is worked out once for every map. */
function placesOf(map: ColumnMap): ReadonlyMap<ColumnRole, readonly number[]> {
  const known = PLACES.get(map);
  if (known) return known;
  const places = new Map<ColumnRole, number[]>();
  for (const { role, index } of map.columns) {
    const list = places.get(role);
    if (list) list.push(index);
    else places.set(role, [index]);
  }
  PLACES.set(map, places);
  return places;
}

/** A map in which a person has given one column another role. */
export function withRole(map: ColumnMap, index: number, role: ColumnRole): ColumnMap {
  return {
    columns: map.columns.map((column) => {
      if (column.index === index) return { ...column, role, confidence: 1, why: 'set by hand' };
      // Two columns cannot both be the phone: the one named last has it.
      const displaced = column.role === role && !SHARED_ROLES.has(role);
      return displaced
        ? { ...column, role: 'detail', confidence: 1, why: 'another column was given its role' }
        : column;
    }),
  };
}
