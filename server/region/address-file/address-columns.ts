/** What one row of an address file says, as text; empty where it says nothing. */
export interface AddressCells {
  readonly number: string;
  readonly street: string;
  readonly unit: string;
  readonly city: string;
  readonly postcode: string;
  readonly lon: string;
  readonly lat: string;
  /** The whole address in one line, where the file has it only so. */
  readonly whole: string;
}

/**
 * Names of columns, without case, blanks and punctuation, likeliest first. They are those of
 * widespread open address files, of OpenStreetMap's tags (addr:…), and of the NENA Standard for
 * NG9-1-1 GIS Data Model (NENA-STA-006, site/structure address points); from memory, except the tags.
 */
const NAMES = {
  lon: ['lon', 'longitude', 'long', 'lng', 'x'],
  lat: ['lat', 'latitude', 'y'],
  number: [
    'number',
    'housenumber',
    'housenum',
    'houseno',
    'addrhousenumber',
    'addrnum',
    'addrno',
    'addnumber',
    'addressnumber',
    'streetnumber',
  ],
  numberBefore: ['addnumpre', 'addrnumpre'],
  numberAfter: ['addnumsuf', 'addrnumsuf', 'numbersuffix'],
  street: ['street', 'fullname', 'addrstreet', 'fullstreet', 'streetfull'],
  name: ['stname', 'streetname'],
  directionBefore: ['stpredir', 'predir'],
  typeBefore: ['stpretyp', 'pretype'],
  typeAfter: ['stpostyp', 'postype', 'sttype', 'streettype'],
  directionAfter: ['stposdir', 'sufdir', 'posdir'],
  unit: ['unit', 'apt', 'addrunit', 'unitnumber', 'unitno'],
  city: ['city', 'postcomm', 'muni', 'addrcity', 'municipality', 'incmuni', 'town'],
  postcode: ['postcode', 'zip', 'zipcode', 'postalcode', 'addrpostcode'],
  whole: ['fulladdr', 'fulladdress', 'address'],
} as const satisfies Record<string, readonly string[]>;

type Part = keyof typeof NAMES;
export type Columns = Readonly<Partial<Record<Part, string>>>;

const plain = (name: string): string => name.toLowerCase().replace(/[^a-z0-9]/g, '');

/** Which of these headers holds what. */
export function columnsAmong(headers: readonly string[]): Columns {
  const byName = new Map<string, string>();
  for (const header of headers) if (!byName.has(plain(header))) byName.set(plain(header), header);
  const found: Partial<Record<Part, string>> = {};
  for (const [part, names] of Object.entries(NAMES) as [Part, readonly string[]][]) {
    const header = names.flatMap((name) => byName.get(name) ?? [])[0];
    if (header !== undefined) found[part] = header;
  }
  return found;
}

/** What these columns lack for an address, in words; null when they suffice. */
export function lackOf(columns: Columns, hasGeometry: boolean): string | null {
  const lacks: string[] = [];
  if (!columns.whole) {
    if (!columns.number) lacks.push('the house number (call it NUMBER)');
    if (!columns.street && !columns.name) lacks.push('the street (call it STREET)');
  }
  if (!hasGeometry && (!columns.lon || !columns.lat))
    lacks.push('the place in degrees (call them LON and LAT)');
  return lacks.length === 0 ? null : lacks.join(' and ');
}

/** @param cell the value under a header */
export function cellsOf(columns: Columns, cell: (header: string) => string): AddressCells {
  const at = (part: Part): string => {
    const header = columns[part];
    return header === undefined ? '' : cell(header).replace(/\s+/g, ' ').trim();
  };
  const joined = (...parts: Part[]): string =>
    parts
      .map(at)
      .filter((text) => text !== '')
      .join(' ');
  return {
    number: `${at('numberBefore')}${at('number')}${suffix(at('numberAfter'))}`,
    // A whole name is better than one put together of its parts.
    street:
      at('street') ||
      joined('directionBefore', 'typeBefore', 'name', 'typeAfter', 'directionAfter'),
    unit: at('unit'),
    city: at('city'),
    postcode: at('postcode'),
    lon: at('lon'),
    lat: at('lat'),
    whole: at('whole'),
  };
}

/** "12" and "A" are 12A; "12" and "1/2" are 12 1/2. */
const suffix = (text: string): string => (/^\d/.test(text) ? ` ${text}` : text);
