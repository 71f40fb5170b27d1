/** Street types and directions as written, to the one form in which streets are compared. */
export const STREET_TYPES: Readonly<Record<string, string>> = Object.fromEntries(
  Object.entries({
    st: 'street str',
    rd: 'road raod',
    ave: 'avenue av aven avnue',
    dr: 'drive drv',
    ln: 'lane la lne',
    ct: 'court crt',
    cir: 'circle circ',
    blvd: 'boulevard blv bl',
    way: 'wy',
    pl: 'place plc',
    ter: 'terrace terr',
    trl: 'trail tr',
    pkwy: 'parkway pky pkw',
    hwy: 'highway hiway',
    sq: 'square',
    aly: 'alley',
    tpke: 'turnpike tpk',
    plz: 'plaza',
    rte: 'route rt',
    loop: 'lp',
    run: '',
    row: '',
    pt: 'point',
    cv: 'cove',
    xing: 'crossing',
    path: '',
    walk: '',
    bnd: 'bend',
    rdg: 'ridge',
    hl: 'hill',
    hls: 'hills',
    lndg: 'landing',
    quay: '',
    close: '',
    mews: '',
    pike: '',
    vw: 'view',
    gln: 'glen',
    grn: 'green',
    holw: 'hollow',
    cswy: 'causeway',
    brg: 'bridge',
    gdns: 'gardens',
    mnr: 'manor',
    whf: 'wharf',
    lnk: 'link',
    end: '',
    gate: '',
    rise: '',
    esp: 'esplanade',
    crescent: 'cres',
    reach: '',
    strand: '',
    drift: '',
    calle: 'c',
    n: 'north',
    s: 'south',
    e: 'east',
    w: 'west',
    ne: 'northeast',
    nw: 'northwest',
    se: 'southeast',
    sw: 'southwest',
  }).flatMap(([short, longs]) =>
    [short, ...longs.split(' ').filter(Boolean)].map((word) => [word, short]),
  ),
);

const STRONG = new Set(
  'st rd ave dr ln ct cir blvd way pl ter trl pkwy hwy sq aly tpke plz loop row'.split(' '),
);
const DIRECTIONS = new Set('n s e w ne nw se sw'.split(' '));
const NUMBERED = new Set(['hwy', 'rte']);

export const canonicalWord = (word: string): string => STREET_TYPES[word] ?? word;
export const isDirection = (word: string): boolean => DIRECTIONS.has(canonicalWord(word));
export const isStreetType = (word: string): boolean =>
  word in STREET_TYPES && !isDirection(word) && word !== 'c';
/** Types that are hardly ever part of a town's name. */
export const isStrongType = (word: string): boolean => STRONG.has(canonicalWord(word));
/** "Hwy 12": the number belongs to the street. */
export const isNumberedRoad = (word: string): boolean => NUMBERED.has(canonicalWord(word));
